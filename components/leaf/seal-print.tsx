// The seal that a signature prints on the counterfoil: author verdigris, witness slate. Two like figures mean that both
// signed the same SHA-256. Renders on the server as well; drawn once per hash where the caller keeps it.
import type { ReactNode } from "react";
import { Fingerprint } from "./fingerprint.tsx";
import { sealStrokes, sealWord } from "./seal.ts";

export type SealBy = "author" | "witness" | "none";

/** The sentence that has to stand with seals wherever they are relied on (SGN-20). */
export const SEAL_SENTENCE = "The hash decides; the drawing helps the eye.";

type SealProps = {
  hash: string;
  by: SealBy;
  /** Pixels at which it is shown; below 96 a coarser cut is drawn. */
  size?: number;
  /** What it is the seal of, for those who hear the page. Without it the drawing is hidden from them. */
  title?: string;
};

/** The drawing alone. */
export function Seal({ hash, by, size = 160, title }: SealProps) {
  const strokes = sealStrokes(hash, size);
  return (
    <svg
      className={`seal by-${by}`}
      width={size}
      height={size}
      viewBox="-101 -101 202 202"
      fill="none"
      stroke="currentColor"
      strokeLinejoin="round"
      role="img"
      aria-label={title ?? ""}
      aria-hidden={title ? undefined : true}
    >
      {strokes.map((stroke, place) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: a stroke is told by its place, and all change with the hash
        <path key={place} d={stroke.d} strokeWidth={stroke.width} />
      ))}
    </svg>
  );
}

type SealedProps = {
  hash: string;
  by: SealBy;
  /** Printed name of who signed. */
  name: string;
  /** In words: "author", "witness". */
  capacity: string;
  /** Date and time with its zone, ready to be shown. */
  when: string;
  /** The meaning of the signature, word for word. */
  meaning: string;
  size?: number;
  /** Leave the full hash out where it already stands right beside. */
  withoutHash?: boolean;
  children?: ReactNode;
};

/** Seal, its eight characters, who signed, when, what it means, the full hash, and what decides. */
export function Sealed({ hash, by, name, capacity, when, meaning, size = 160, withoutHash, children }: SealedProps) {
  return (
    <div className={`sealed by-${by}`}>
      <Seal hash={hash} by={by} size={size} title={`Seal of ${name}, ${capacity}: ${sealWord(hash)}`} />
      <p className="code">{sealWord(hash)}</p>
      <p>
        <b>{name}</b>, {capacity}
        <br />
        {when}
        <br />
        <span className="faint">“{meaning}”</span>
      </p>
      {withoutHash ? null : <Fingerprint hex={hash} label="SHA-256 of the signed content" />}
      <p className="note">{SEAL_SENTENCE}</p>
      {children}
    </div>
  );
}
