// Applies the numbered SQL of drizzle/, forward only. client.ts hands in the connection, inside one transaction and, on a
// server, under an advisory lock.
import { createHash } from "node:crypto";
import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { z } from "zod";

export type MigrationConnection = {
  /** runs SQL text that may hold several statements */
  run(text: string): Promise<void>;
  rows(text: string, values: unknown[]): Promise<unknown[]>;
};

/** Thrown when the store was written by a version of the program that this one does not know. */
export class UnknownMigration extends Error {}

export type Migration = { tag: string; text: string; sha256: string };

const journal = z.object({ entries: z.array(z.object({ idx: z.number(), tag: z.string() })) });
const applied = z.array(z.object({ position: z.coerce.number(), tag: z.string(), sha256: z.string() }));

/** The numbered SQL in its order. */
export async function readMigrations(folder = join(process.cwd(), "drizzle")): Promise<Migration[]> {
  const { entries } = journal.parse(JSON.parse(await readFile(join(folder, "meta", "_journal.json"), "utf8")));
  return Promise.all(
    entries
      .toSorted((a, b) => a.idx - b.idx)
      .map(async ({ tag }) => {
        const text = await readFile(join(folder, `${tag}.sql`), "utf8");
        return { tag, text, sha256: createHash("sha256").update(text).digest("hex") };
      }),
  );
}

/** Applies what the store has not seen yet. Refuses a store whose past differs from the files: going on would mix two histories. */
export async function applyMigrations(connection: MigrationConnection): Promise<void> {
  const migrations = await readMigrations();
  await connection.run(
    "create table if not exists migrations (position integer primary key, tag text not null, sha256 text not null, at timestamptz not null)",
  );
  const past = applied.parse(
    await connection.rows("select position, tag, sha256 from migrations order by position", []),
  );
  for (const { position, tag, sha256 } of past) {
    const ours = migrations[position];
    if (ours === undefined || ours.sha256 !== sha256) {
      throw new UnknownMigration(
        `The store was changed by migration "${tag}", which this version of Counterleaf does not have in this form. ` +
          "Start the version that wrote the store, or a later one.",
      );
    }
  }
  for (const [position, { tag, text, sha256 }] of migrations.entries()) {
    if (position < past.length) continue;
    await connection.run(text);
    await connection.rows(
      "insert into migrations (position, tag, sha256, at) values ($1, $2, $3, $4) returning position",
      [position, tag, sha256, new Date().toISOString()],
    );
  }
}
