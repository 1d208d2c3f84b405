// In print the counterfoil stands on every sheet; a draft says across each sheet that it is one.
import type { ReactNode } from "react";

type PrintStubProps = {
  number: string;
  of?: ReactNode;
  /** Sections: state, author, signatures with seal and full hash, calculations. */
  children: ReactNode;
  /** At the foot: when it was printed, and what comes first. */
  foot?: ReactNode;
};

export function PrintStub({ number, of, children, foot }: PrintStubProps) {
  return (
    <div className="print-stub" aria-hidden="true">
      <p className="number">{number}</p>
      {of ? <p>{of}</p> : null}
      {children}
      {foot ? <p className="foot">{foot}</p> : null}
    </div>
  );
}

/** Words across every printed sheet of what is not signed, such as "Draft, not signed". */
export function PrintWatermark({ children }: { children: string }) {
  return (
    <div className="print-watermark" aria-hidden="true">
      <span>{children}</span>
    </div>
  );
}
