"use client";
import { useEffect, useState } from "react";
// Title, the day the work was done, and, when that was another day, why it is recorded late (REC-08).
import type * as Y from "yjs";
import { daysSince, formatDateTime } from "../components/format.ts";
import { EnteredText } from "./entered-text.tsx";
import { HEAD_ORIGIN } from "./plugins/together.ts";
import { isDateOrBlank, PAGE_LIMITS, type PageHead } from "./schema/index.ts";

type HeadFieldsProps = {
  doc: Y.Doc;
  /** when the server recorded the entry's first revision, ISO 8601 in UTC */
  recordedAt: string;
  timeZone: string;
  isEditable: boolean;
};

export function HeadFields({ doc, recordedAt, timeZone, isEditable }: HeadFieldsProps) {
  const head = useHead(doc);
  const set = (name: keyof PageHead, value: string) =>
    doc.transact(() => doc.getMap<string>("head").set(name, value), HEAD_ORIGIN);
  const days = head.doneOn === "" ? 0 : daysSince(head.doneOn, recordedAt, timeZone);
  const isLate = days > 1;
  const isAhead = days < 0;
  return (
    <header className="set-in head-fields">
      <h1 className="away">{head.title || "Without a title"}</h1>
      <EnteredText
        field="head title"
        label="Title"
        lines="one"
        value={head.title}
        most={PAGE_LIMITS.titleCharacters}
        disabled={!isEditable}
        className="title-field"
        controlClassName="title-in"
        onEnter={(title) => set("title", title)}
      />
      <div className="row-of">
        <EnteredText
          field="head doneOn"
          label="Done on"
          type="date"
          value={head.doneOn}
          most={10}
          disabled={!isEditable}
          hint={`Recorded ${formatDateTime(recordedAt, timeZone)}`}
          error={isAhead ? "The day lies after the day on which this was recorded. Check it." : undefined}
          onEnter={(doneOn) => {
            if (isDateOrBlank(doneOn)) set("doneOn", doneOn);
          }}
        />
        {isLate || head.lateReason !== "" ? (
          <EnteredText
            field="head lateReason"
            label={isLate ? `Recorded late, ${days} days after: why?` : "Recorded late because"}
            value={head.lateReason}
            most={PAGE_LIMITS.reasonCharacters}
            disabled={!isEditable}
            error={isLate && head.lateReason === "" ? "Say why it was written down on another day." : undefined}
            onEnter={(reason) => set("lateReason", reason)}
          />
        ) : null}
      </div>
    </header>
  );
}

/** The fields above the page as they stand, from whoever set them. */
export function useHead(doc: Y.Doc): PageHead {
  const [head, setHead] = useState(() => readHead(doc));
  useEffect(() => {
    const map = doc.getMap<string>("head");
    const read = () => setHead(readHead(doc));
    map.observe(read);
    read();
    return () => map.unobserve(read);
  }, [doc]);
  return head;
}

function readHead(doc: Y.Doc): PageHead {
  const map = doc.getMap<unknown>("head");
  const text = (name: string) => {
    const value = map.get(name);
    return typeof value === "string" ? value : "";
  };
  return { title: text("title"), doneOn: text("doneOn"), lateReason: text("lateReason") };
}
