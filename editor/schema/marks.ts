// What running text may carry besides the marks of StarterKit, and which links are links.
import { Mark } from "@tiptap/core";
import { PAGE_LIMITS } from "./page.ts";

export const LINK_PROTOCOLS = ["http", "https", "mailto"] as const;

/** True for an address that a page may link to: http, https or mailto, in full, without blanks or control characters. */
export function isLinkAllowed(href: string): boolean {
  if (href.length > PAGE_LIMITS.hrefCharacters || !/^(https?:\/\/|mailto:)[^\s\p{Cc}]+$/iu.test(href)) return false;
  return URL.canParse(href) && LINK_PROTOCOLS.some((protocol) => new URL(href).protocol === `${protocol}:`);
}

export const Subscript = Mark.create({
  name: "subscript",
  excludes: "superscript subscript",
  parseHTML: () => [{ tag: "sub" }],
  renderHTML: ({ HTMLAttributes }) => ["sub", HTMLAttributes, 0],
});

export const Superscript = Mark.create({
  name: "superscript",
  excludes: "superscript subscript",
  parseHTML: () => [{ tag: "sup" }],
  renderHTML: ({ HTMLAttributes }) => ["sup", HTMLAttributes, 0],
});
