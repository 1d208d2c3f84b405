// A screen is one leaf with one counterfoil. On a desk screen the counterfoil stands to the right of the perforation and
// its head sticks; on a phone the head is a row above the leaf and the rest folds under it. The page is the document's
// main part and the counterfoil stands beside it, both landmarks of their own.
import type { ReactNode } from "react";
import { classOf } from "../ui/field-parts.tsx";

const LONGEST_UNBROKEN = 16;

type LeafProps = {
  /** `<Counterfoil>`; without it the leaf is one narrow sheet. */
  counterfoil?: ReactNode;
  /** A newer sheet lies over this one (superseded), or it was struck out as a whole (voided). */
  was?: "superseded" | "voided";
  /** `<PrintStub>` and, for a draft, `<PrintWatermark>`. */
  print?: ReactNode;
  children: ReactNode;
  className?: string;
};

export function Leaf({ counterfoil, was, print, children, className }: LeafProps) {
  return (
    <div className={classOf("leaf", !counterfoil && "bare", was === "superseded" && "was", className)}>
      {was === "superseded" ? <i className="over" aria-hidden="true" /> : null}
      {counterfoil}
      <main className="page" id="leaf" tabIndex={-1}>
        {was === "voided" ? (
          <div className="cancel">
            <svg className="stroke" viewBox="0 0 100 100" preserveAspectRatio="none" aria-hidden="true">
              <path d="M0 98 100 2" vectorEffect="non-scaling-stroke" />
            </svg>
            {children}
          </div>
        ) : (
          children
        )}
      </main>
      {print}
    </div>
  );
}

type TitleProps = {
  children: ReactNode;
  /** Under the title, in faint ink: dates, place. */
  under?: ReactNode;
  /** Over running text the title stands on the text's edge, not in the margin. */
  setIn?: boolean;
  struck?: boolean;
};

/** The title of a leaf says what is the case. */
export function LeafTitle({ children, under, setIn, struck }: TitleProps) {
  return (
    <header className={setIn ? "set-in" : undefined}>
      <h1 className={classOf("title", struck && "struck")}>
        {typeof children === "string" ? unbroken(children) : children}
      </h1>
      {under ? <p className="under-title">{under}</p> : null}
    </header>
  );
}

/** A short hyphenated word ("make-up") is not broken at its hyphen; the text itself stays as it was written. */
function unbroken(title: string): ReactNode {
  return title.split(/(\s+)/).map((word, place) =>
    word.includes("-") && word.length <= LONGEST_UNBROKEN ? (
      // biome-ignore lint/suspicious/noArrayIndexKey: a word is told by its place in the title
      <span className="nowrap" key={place}>
        {word}
      </span>
    ) : (
      word
    ),
  );
}

/** Goes past the navigation to the leaf; the first thing that the keyboard finds on a page. */
export function SkipToLeaf() {
  return (
    <a className="skip" href="#leaf">
      To the leaf
    </a>
  );
}
