"use client";
// Long work: what is being done and how far it is. Without `done` it only says that it goes on.
import { Label, ProgressBar } from "react-aria-components";

export type ProgressProps = {
  /** What is being done: "Hashing meter-m2.csv". */
  label: string;
  /** From 0 to `of`. */
  done?: number;
  of?: number;
  /** How far, in words: "3 of 10 calculations". Without it, per cent. */
  words?: string;
};

export function Progress({ label, done, of = 100, words }: ProgressProps) {
  const known = done !== undefined;
  return (
    <ProgressBar
      className="progress"
      value={known ? done : undefined}
      maxValue={of}
      isIndeterminate={!known}
      valueLabel={words}
    >
      {({ percentage, valueText }) => (
        <>
          <span className="said">
            <Label>{label}</Label>
            <span className="figs">{known ? (words ?? valueText) : ""}</span>
          </span>
          <div className={known ? "rail" : "rail unknown"}>
            <div className="done" style={known ? { width: `${percentage ?? 0}%` } : undefined} />
          </div>
        </>
      )}
    </ProgressBar>
  );
}
