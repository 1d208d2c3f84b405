// Hazards of what is poured together: each ingredient's own, never the mixture's (SAF-01, SAF-06).
import { HazardRow } from "../../components/leaf/hazard-row.tsx";
import { SideRow } from "../../components/leaf/side-row.tsx";
import type { HazardOfCompound } from "../../components/query/results.ts";

export function Hazards({ hazards }: { hazards: readonly HazardOfCompound[] }) {
  if (hazards.length === 0) return null;
  return (
    <SideRow label="Hazards" note="of the ingredients" level={3} long>
      {hazards.map(({ compound, name, record }) =>
        record?.classified === false ? (
          <div className="haz" key={compound}>
            <div>
              <p>
                <b>{name}</b>: {record.note}
              </p>
              {record.fromMemory ? <p className="note">From memory, not read from the source.</p> : null}
            </div>
          </div>
        ) : (
          <HazardRow key={compound} name={name} record={record === null ? null : shownRecord(record)} />
        ),
      )}
      <p className="note">
        Hazards are those of the ingredients; the mixture itself is not classified here. The supplier’s safety data
        sheet of the lot in hand comes first.
      </p>
    </SideRow>
  );
}

type Classified = Extract<NonNullable<HazardOfCompound["record"]>, { classified: true }>;

function shownRecord(record: Classified) {
  return {
    pictograms: record.pictograms.map((pictogram) => pictogram.code),
    signalWord: record.signalWord ?? "",
    statements: [...record.statements, ...record.supplemental].map(({ code, text }) => ({ code, sentence: text })),
    source: record.note === null ? record.source : `${record.source} (${record.note})`,
    date: "",
    fromMemory: record.fromMemory,
  };
}
