// Hazards of a reagent: pictograms with their names, signal word, statements as code and sentence, source and date.
// Without a record it says so in words and never leaves a blank (SAF-01).
import type { ReactNode } from "react";

/** Names as of the GHS, annex 1; the drawings in public/ghs are ours after its description. */
export const PICTOGRAMS = {
  GHS01: "Exploding bomb",
  GHS02: "Flame",
  GHS03: "Flame over circle",
  GHS04: "Gas cylinder",
  GHS05: "Corrosion",
  GHS06: "Skull and crossbones",
  GHS07: "Exclamation mark",
  GHS08: "Health hazard",
  GHS09: "Environment",
} as const;

export type Pictogram = keyof typeof PICTOGRAMS;

export function isPictogram(code: string): code is Pictogram {
  return Object.hasOwn(PICTOGRAMS, code);
}

export type HazardRecord = {
  pictograms: readonly string[];
  /** "Danger", "Warning", or "" where the classification has none. */
  signalWord: string;
  statements: readonly { code: string; sentence: string }[];
  source: string;
  /** As of when, ready to be shown; "" when the source gives none, which is then said. */
  date: string;
  fromMemory?: boolean;
};

type HazardRowProps = {
  /** Of what: "citric acid monohydrate". */
  name: string;
  record: HazardRecord | null;
  /** The sheet of the lot in hand, local rules. */
  children?: ReactNode;
};

export const NO_HAZARD_DATA = "no hazard data on file";

export function HazardRow({ name, record, children }: HazardRowProps) {
  if (!record) {
    return (
      <div className="haz">
        <div>
          <p>
            <b>{name}</b>: {NO_HAZARD_DATA}
          </p>
          <p className="note">That is no statement about its hazards. The supplier’s safety data sheet comes first.</p>
          {children}
        </div>
      </div>
    );
  }
  const signs = record.pictograms.filter(isPictogram);
  return (
    <div className="haz">
      {signs.length > 0 ? (
        <div className="signs">
          {signs.map((code) => (
            <figure className="sign" key={code}>
              {/* The name stands under it in words, so the drawing itself is silent. */}
              {/* biome-ignore lint/performance/noImgElement: a drawing of 1 kB needs no image service */}
              <img src={`/ghs/${code}.svg`} alt="" width={62} height={62} />
              {PICTOGRAMS[code]}
            </figure>
          ))}
        </div>
      ) : null}
      <div>
        <p>
          <b>{name}</b>
          {record.signalWord ? (
            <>
              {": "}
              <span className="word-of">{record.signalWord}</span>
            </>
          ) : (
            ": no signal word"
          )}
        </p>
        <ul>
          {record.statements.map((statement) => (
            <li key={statement.code}>
              <span className="mono">{statement.code}</span>
              <span>{statement.sentence}</span>
            </li>
          ))}
        </ul>
        <p className="note">
          {record.source}
          {record.date ? `, ${record.date}` : ", no date given"}
          {record.fromMemory ? "; from memory, not read from the source" : ""}. The sheet of the lot in hand comes
          first.
        </p>
        {children}
      </div>
    </div>
  );
}
