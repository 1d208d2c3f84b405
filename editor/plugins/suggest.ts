// "/" opens what can be put in, "@" the compounds. The plug-in only knows where the question stands and which keys belong to it;
// the list itself is a React component.
import { Extension } from "@tiptap/core";
import { type EditorState, Plugin, PluginKey } from "@tiptap/pm/state";

export type Question = { sign: "/" | "@"; text: string; from: number; to: number };
type SuggestState = { question: Question | null /** closed by Escape at this place */; closedAt: number | null };

export const suggestKey = new PluginKey<SuggestState>("suggest");
const LONGEST = 60;

export type SuggestKeys = (event: KeyboardEvent) => boolean;

export const Suggest = Extension.create<{ onKey: SuggestKeys }>({
  name: "suggest",
  // Its keys come before those that split a paragraph or leave a list.
  priority: 900,
  addOptions: () => ({ onKey: () => false }),
  addProseMirrorPlugins() {
    const { onKey } = this.options;
    return [
      new Plugin<SuggestState>({
        key: suggestKey,
        state: {
          init: () => ({ question: null, closedAt: null }),
          apply: (tr, before, _old, state) => {
            const question = findQuestion(state);
            const meta: unknown = tr.getMeta(suggestKey);
            const mapped = before.closedAt === null ? null : tr.mapping.map(before.closedAt);
            const closedAt = meta === "close" && question !== null ? question.from : mapped;
            if (question === null || question.from === closedAt)
              return { question: null, closedAt: question?.from ?? null };
            return { question, closedAt: null };
          },
        },
        props: {
          handleKeyDown: (view, event) => {
            const state = suggestKey.getState(view.state);
            if (state === undefined || state.question === null || view.composing) return false;
            if (event.key === "Escape") {
              view.dispatch(view.state.tr.setMeta(suggestKey, "close"));
              return true;
            }
            return onKey(event);
          },
        },
      }),
    ];
  },
});

/** The sign and the words after it, when the caret stands behind them in the same run of text. */
function findQuestion(state: EditorState): Question | null {
  const { selection } = state;
  const { $from } = selection;
  if (!selection.empty || !$from.parent.isTextblock || $from.parent.type.spec.code === true) return null;
  // A leaf in the line counts as one character, so that places and characters agree.
  const before = $from.parent.textBetween(
    Math.max(0, $from.parentOffset - LONGEST),
    $from.parentOffset,
    undefined,
    "\ufffc",
  );
  const match = /(?:^|[\s(\ufffc])([/@])([^/@\ufffc]*)$/u.exec(before);
  const sign = match?.[1];
  const text = match?.[2] ?? "";
  if (
    (sign !== "/" && sign !== "@") ||
    text.startsWith(" ") ||
    (sign === "/" && /\s/.test(text.trimEnd()) && text.length > 24)
  )
    return null;
  const from = $from.pos - text.length - 1;
  return { sign, text, from, to: $from.pos };
}
