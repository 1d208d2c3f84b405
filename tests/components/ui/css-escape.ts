// jsdom has no CSS.escape, which the parts of react-aria-components call when something opens. Enough of it for names.
Object.assign(globalThis, { CSS: { escape: (text: string) => text.replace(/[^\w-]/g, (sign) => `\\${sign}`) } });
