// What vouches for the leaf: number, state, whether it is saved, the one primary act; then who, what, which seals.
import type { ReactNode } from "react";
import { classOf } from "../ui/field-parts.tsx";

type CounterfoilProps = {
  /** `<StubHead>`: stays in reach while the leaf scrolls. */
  head?: ReactNode;
  children?: ReactNode;
  label?: string;
};

export function Counterfoil({ head, children, label = "Counterfoil" }: CounterfoilProps) {
  return (
    <aside className="counterfoil" aria-label={label}>
      {head}
      {children ? <div className="stub">{children}</div> : null}
    </aside>
  );
}

type StubHeadProps = {
  /** "DSB-0042", or another short name of what the leaf is about. */
  number: ReactNode;
  /** Under the number: notebook, revision, since when. */
  of?: ReactNode;
  /** `<StateMark>` of the record. */
  state?: ReactNode;
  /** `<StateMark>` of what was typed: saved, saving, offline. */
  saved?: ReactNode;
  /** The one primary act. */
  act?: ReactNode;
  struck?: boolean;
};

export function StubHead({ number, of, state, saved, act, struck }: StubHeadProps) {
  return (
    <div className="stub-head">
      <h2 className={classOf("number", struck && "struck")}>{number}</h2>
      {of ? <p className="of">{of}</p> : null}
      {state || saved ? (
        <p className="row-of">
          {state}
          {saved}
        </p>
      ) : null}
      {act ? <div className="head-act">{act}</div> : null}
    </div>
  );
}

type StubSectionProps = {
  title?: ReactNode;
  children: ReactNode;
  /** Belongs to the section above: no rule between them. */
  joined?: boolean;
};

export function StubSection({ title, children, joined }: StubSectionProps) {
  return (
    <section className={joined ? "joined" : undefined}>
      {title ? <h3>{title}</h3> : null}
      {children}
    </section>
  );
}

type VouchProps = {
  /** What it vouches for: "Calculation E1". Names the group as well, unless `label` does. */
  title?: string;
  label?: string;
  children: ReactNode;
};

/**
 * What vouches for one row of the page. Put it right before the row that it stands beside: it then starts at the same
 * height beyond the perforation. On a phone and in print it follows in the page.
 */
export function Vouch({ title, label = title, children }: VouchProps) {
  return (
    // biome-ignore lint/a11y/useSemanticElements: a landmark inside the page would be one too many, and it is no form group
    <div className="vouch" role="group" aria-label={label}>
      {title ? <p className="head">{title}</p> : null}
      {children}
    </div>
  );
}
