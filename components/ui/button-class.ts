// Apart from the button itself, so that a page on the server can give a link a button's look.

export type ButtonKind = "first" | "plain" | "stop" | "quiet" | "quiet-stop";

const classes: Record<ButtonKind, string> = {
  first: "btn first",
  plain: "btn",
  stop: "btn stop",
  quiet: "quiet",
  "quiet-stop": "quiet stop",
};

/** The class of a link that looks like a button: `<Link className={buttonClass("plain")} …>`. */
export function buttonClass(kind: ButtonKind): string {
  return classes[kind];
}
