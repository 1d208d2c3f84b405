// Which tabs of this browser are alive: each holds a lock named after itself as long as it lives, however it ends. What a tab left
// behind is taken over by whoever gets its lock.

/** Holds this tab's lock until the returned function is called. Without locks (an address that is not secure) nothing is held. */
export function holdTab(tab: string): () => void {
  if (!hasLocks()) return () => undefined;
  let release: () => void = () => undefined;
  const held = new Promise<void>((resolve) => {
    release = resolve;
  });
  // Refused only when the page is being taken down, and then nothing is to be held any more.
  void navigator.locks.request(lockName(tab), () => held).catch(() => undefined);
  return release;
}

/**
 * Runs `take` when the tab is gone, holding its lock meanwhile, and answers whether it was. Without locks every tab counts as gone:
 * then two may send the same update, which the server takes once.
 */
export async function whenTabIsGone(tab: string, take: () => Promise<void>): Promise<boolean> {
  if (!hasLocks()) {
    await take();
    return true;
  }
  return navigator.locks.request(lockName(tab), { ifAvailable: true }, async (lock) => {
    if (lock === null) return false;
    await take();
    return true;
  });
}

/** A random name: for tabs, updates, blocks and rows. */
export function newName(): string {
  return [...crypto.getRandomValues(new Uint8Array(16))].map((byte) => byte.toString(16).padStart(2, "0")).join("");
}

function hasLocks(): boolean {
  return "locks" in navigator && navigator.locks !== undefined;
}

function lockName(tab: string): string {
  return `counterleaf-tab-${tab}`;
}
