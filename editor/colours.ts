// The ink of another person's caret: always the same for one person. y-prosemirror wants six hexadecimal digits.

const CARET_COLOURS = ["#3a5a8c", "#0f6e63", "#8a560d", "#a5322c", "#5c4a7d", "#4f6b2c"] as const;

export function colourOf(personId: string): string {
  let sum = 0;
  for (const letter of personId) sum = (sum * 31 + letter.charCodeAt(0)) % 9973;
  return CARET_COLOURS[sum % CARET_COLOURS.length] ?? CARET_COLOURS[0];
}
