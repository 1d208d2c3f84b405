"use client";
// The parts of a page that are more than text, as they stand in the editor.
import { type NodeViewProps, NodeViewWrapper, ReactNodeViewRenderer } from "@tiptap/react";
import { WrittenFormula } from "../../components/chem/formula.tsx";
import { FormulaText } from "../../components/chem/formula-text.tsx";
import { usePage } from "../page-context.tsx";
import { AttachmentNode, CompositionRow, Equilibrium, FormulaBlock, InlineFormula, Mention } from "../schema/nodes.ts";
import { AttachmentView } from "./attachment.tsx";
import { EquilibriumView } from "./equilibrium.tsx";

/** Inside a block's fields the keys and the mouse belong to the fields, not to the page's text. */
const ownEvents = { stopEvent: () => true, ignoreMutation: () => true };

export const pageViews = [
  InlineFormula.extend({ addNodeView: () => ReactNodeViewRenderer(InlineFormulaView, { as: "span" }) }),
  FormulaBlock.extend({ addNodeView: () => ReactNodeViewRenderer(FormulaBlockView) }),
  Mention.extend({ addNodeView: () => ReactNodeViewRenderer(MentionView, { as: "span" }) }),
  AttachmentNode.extend({ addNodeView: () => ReactNodeViewRenderer(AttachmentView, ownEvents) }),
  // The block is one thing for the caret; its rows are drawn by the block's own view.
  Equilibrium.extend({ atom: true, addNodeView: () => ReactNodeViewRenderer(EquilibriumView, ownEvents) }),
  CompositionRow,
];

function InlineFormulaView(props: NodeViewProps) {
  return (
    <NodeViewWrapper as="span">
      <FormulaButton {...props} display={false} />
    </NodeViewWrapper>
  );
}

function FormulaBlockView(props: NodeViewProps) {
  return (
    <NodeViewWrapper>
      <FormulaButton {...props} display />
    </NodeViewWrapper>
  );
}

function FormulaButton({ editor, node, updateAttributes, display }: NodeViewProps & { display: boolean }) {
  const { askFormula } = usePage();
  const tex = String(node.attrs.tex);
  const formula = <WrittenFormula tex={tex === "" ? "?" : tex} display={display} />;
  if (!editor.isEditable) return formula;
  return (
    <button
      type="button"
      className={display ? "math-edit display" : "math-edit"}
      aria-label={`Change the formula ${tex}`}
      onClick={() => askFormula({ tex, display, onDone: (next) => updateAttributes({ tex: next }) })}
    >
      {formula}
    </button>
  );
}

function MentionView({ node }: NodeViewProps) {
  const { compounds } = usePage();
  const id = String(node.attrs.compound);
  const item = compounds.get(id);
  return (
    <NodeViewWrapper as="span" className="cpd" data-compound={id}>
      {item === undefined ? id.replace(/^[a-z]+:/, "").replaceAll("-", " ") : item.name.replaceAll(" %", "\u00a0%")}
      {item === undefined || item.formula === "" ? null : (
        <span className="form">
          <FormulaText formula={item.formula} />
        </span>
      )}
    </NodeViewWrapper>
  );
}
