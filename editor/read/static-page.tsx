// A page without the editor: for signed pages, readers, and what is shown before a signature. It renders on the server and runs
// nothing in the browser.
import type { ReactNode } from "react";
import { WrittenFormula } from "../../components/chem/formula.tsx";
import { FormulaText } from "../../components/chem/formula-text.tsx";
import { formatDate } from "../../components/format.ts";
import type { AttachmentMeta } from "../../components/query/attachments.ts";
import type { SolvedAnswer } from "../../components/query/results.ts";
import { ScrollRegion } from "../../components/ui/scroll-region.tsx";
import {
  blocksOf,
  type EquilibriumBlock,
  isLinkAllowed,
  type PageHead,
  type PageJson,
  type PageMark,
  type PageNode,
  textAttribute,
} from "../schema/index.ts";
import { FileFigure } from "./file-figure.tsx";
import { StaticBlock } from "./static-block.tsx";

export type StaticPageProps = {
  page: PageJson;
  head: PageHead;
  /** compound id → name and formula */
  names: Readonly<Record<string, { name: string; formula: string }>>;
  /** block id → its inputs and answer as pinned, or as solved now; one that is missing is shown as not solved */
  blocks: Readonly<Record<string, { block: EquilibriumBlock; answer: SolvedAnswer | null }>>;
  attachments: Readonly<Record<string, AttachmentMeta & { struck?: string }>>;
  decimalSign?: "." | ",";
};

export function StaticPage({ page, head, names, blocks, attachments, decimalSign = "." }: StaticPageProps) {
  const known: Known = { names, blocks, attachments, decimalSign, order: blocksOf(page), next: 0 };
  return (
    <>
      <header className="set-in">
        <h1 className={head.title === "" ? "title faint" : "title"}>{head.title || "Without a title"}</h1>
        {head.doneOn === "" ? null : (
          <p className="under-title">
            Done on {formatDate(head.doneOn)}
            {head.lateReason === "" ? null : `; recorded late: ${head.lateReason}`}
          </p>
        )}
      </header>
      <div className="written">{childrenOf(page, known)}</div>
    </>
  );
}

type Known = Omit<StaticPageProps, "page" | "head"> & {
  decimalSign: "." | ",";
  order: readonly EquilibriumBlock[];
  /** the place in `order` of the block that comes next */
  next: number;
};

function childrenOf(node: PageNode | PageJson, known: Known): ReactNode[] {
  return (node.content ?? []).map((child, place) => <Keyed key={keyOf(child, place)}>{shown(child, known)}</Keyed>);
}

function Keyed({ children }: { children: ReactNode }) {
  return children;
}

/** A frozen page is never reordered: the place is the key. */
function keyOf(node: PageNode, place: number): string {
  return `${place} ${node.type}`;
}

function shown(node: PageNode, known: Known): ReactNode {
  switch (node.type) {
    case "text":
      return marked(node);
    case "paragraph":
      return <p>{withRoom(childrenOf(node, known))}</p>;
    case "heading":
      return heading(node, known);
    case "bulletList":
      return <ul>{childrenOf(node, known)}</ul>;
    case "orderedList":
      return <ol start={numberAttribute(node, "start", 1)}>{childrenOf(node, known)}</ol>;
    case "listItem":
      return <li>{childrenOf(node, known)}</li>;
    case "blockquote":
      return <blockquote>{childrenOf(node, known)}</blockquote>;
    case "codeBlock":
      return (
        <pre>
          <code>{childrenOf(node, known)}</code>
        </pre>
      );
    case "horizontalRule":
      return <hr />;
    case "hardBreak":
      return <br />;
    case "table":
      return (
        <ScrollRegion label="Table">
          <table>
            <tbody>{childrenOf(node, known)}</tbody>
          </table>
        </ScrollRegion>
      );
    case "tableRow":
      return <tr>{childrenOf(node, known)}</tr>;
    case "tableHeader":
      return <th>{childrenOf(node, known)}</th>;
    case "tableCell":
      return <td>{childrenOf(node, known)}</td>;
    case "formula":
      return <WrittenFormula tex={textAttribute(node, "tex")} />;
    case "formulaBlock":
      return <WrittenFormula tex={textAttribute(node, "tex")} display />;
    case "mention":
      return mention(textAttribute(node, "compound"), known);
    case "attachment":
      return attachment(node, known);
    case "equilibrium":
      return block(known);
    default:
      // Validation knows every node; one that is missing here would be left out of a signed page without a word.
      throw new Error(`A page node that cannot be shown: ${node.type}`);
  }
}

/** An empty paragraph keeps its line and its number. */
function withRoom(children: ReactNode[]): ReactNode {
  return children.length > 0 ? children : <br />;
}

function heading(node: PageNode, known: Known): ReactNode {
  switch (numberAttribute(node, "level", 1)) {
    case 1:
      return <h1>{childrenOf(node, known)}</h1>;
    case 2:
      return <h2>{childrenOf(node, known)}</h2>;
    default:
      return <h3>{childrenOf(node, known)}</h3>;
  }
}

function numberAttribute(node: PageNode, name: string, fallback: number): number {
  const value = node.attrs?.[name];
  return typeof value === "number" ? value : fallback;
}

function marked(node: PageNode): ReactNode {
  let shownText: ReactNode = node.text ?? "";
  for (const mark of [...(node.marks ?? [])].reverse()) shownText = inMark(mark, shownText);
  return shownText;
}

function inMark(mark: PageMark, inner: ReactNode): ReactNode {
  switch (mark.type) {
    case "bold":
      return <strong>{inner}</strong>;
    case "italic":
      return <em>{inner}</em>;
    case "underline":
      return <u>{inner}</u>;
    case "strike":
      return <s>{inner}</s>;
    case "code":
      return <code>{inner}</code>;
    case "subscript":
      return <sub>{inner}</sub>;
    case "superscript":
      return <sup>{inner}</sup>;
    case "link": {
      const href = mark.attrs?.href;
      if (typeof href !== "string" || !isLinkAllowed(href)) return inner;
      return (
        <a href={href} target="_blank" rel="noopener noreferrer nofollow">
          {inner}
        </a>
      );
    }
    default:
      throw new Error(`A mark that cannot be shown: ${mark.type}`);
  }
}

function mention(id: string, { names }: Known): ReactNode {
  const compound = Object.hasOwn(names, id) ? names[id] : undefined;
  return (
    <span className="cpd">
      {unbrokenPercent(compound?.name ?? id)}
      {compound === undefined || compound.formula === "" ? null : (
        <span className="form">
          <FormulaText formula={compound.formula} />
        </span>
      )}
    </span>
  );
}

/** "85 %" stays on one line. */
function unbrokenPercent(name: string): string {
  return name.replaceAll(" %", "\u00a0%");
}

function attachment(node: PageNode, { attachments }: Known): ReactNode {
  const id = textAttribute(node, "attachment");
  const file = Object.hasOwn(attachments, id) ? attachments[id] : undefined;
  return <FileFigure id={id} file={file ?? null} caption={textAttribute(node, "caption")} struck={file?.struck} />;
}

function block(known: Known): ReactNode {
  const onPage = known.order[known.next];
  known.next += 1;
  if (onPage === undefined) return null;
  const pinned = Object.hasOwn(known.blocks, onPage.id) ? known.blocks[onPage.id] : undefined;
  return (
    <StaticBlock
      block={pinned?.block ?? onPage}
      number={known.next}
      answer={pinned?.answer ?? null}
      names={known.names}
      decimalSign={known.decimalSign}
    />
  );
}
