// What searching reads. Both tables are derived, and filled by triggers of drizzle/ whenever a page's derived text or its
// attachments change, so that no road into the store leaves them behind.
import { customType, doublePrecision, index, integer, pgTable, primaryKey, text } from "drizzle-orm/pg-core";
import { entries, revisions } from "./records.ts";

const words = customType<{ data: string }>({ dataType: () => "tsvector" });

/** The words of a revision: its entry's number, title, page, and the names of its attachments. */
export const searchWords = pgTable(
  "search_words",
  {
    revisionId: text("revision_id")
      .primaryKey()
      .references(() => revisions.id),
    entryId: text("entry_id")
      .notNull()
      .references(() => entries.id),
    words: words("words").notNull(),
  },
  (t) => [index("search_words_words").using("gin", t.words)],
);

/** Every pH of a revision as a number: "calculated" or "measured", in the order of its blocks. */
export const searchPH = pgTable(
  "search_ph",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    kind: text("kind").notNull(),
    position: integer("position").notNull(),
    entryId: text("entry_id")
      .notNull()
      .references(() => entries.id),
    pH: doublePrecision("ph").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.revisionId, t.kind, t.position] }),
    index("search_ph_value").on(t.kind, t.pH, t.entryId),
  ],
);
