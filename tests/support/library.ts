// A look into the library's tables for tests, and a constant written behind the program's back.
import { sql } from "drizzle-orm";
import { z } from "zod";
import { type Db, readRows } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";

export async function countLibrary(db: Db): Promise<Record<string, number>> {
  const [row] = await readRows(
    db,
    z.record(z.string(), z.coerce.number()),
    sql`select (select count(*) from families) as families, (select count(*) from reagents) as reagents,
      (select count(*) from constants) as constants, (select count(*) from ions) as ions, (select count(*) from mixing) as mixing,
      (select count(*) from compound_names) as names, (select count(*) from compound_families) as memberships,
      (select count(*) from hazards) as hazards`,
  );
  return row ?? {};
}

/** Makes the store look as if it had been filled by a library with another value; `inPlace` tries what the store forbids. */
export async function forgeConstant(
  db: Db,
  forged: { family: string; step: number; pKa: string; inPlace?: boolean },
): Promise<void> {
  const { family, step, pKa } = forged;
  if (forged.inPlace) {
    await db.execute(sql`update constants set pka = ${pKa} where family_id = ${family} and step = ${step}`);
    return;
  }
  await db.execute(
    sql`update constants set current = false where family_id = ${family} and step = ${step} and current`,
  );
  await db.execute(sql`insert into constants (id, family_id, step, version, pka, basis, temperature_c, source, from_memory, nominal, since, current)
    select ${family} || '.' || ${step}::text || '.v2', ${family}, ${step}, 2, ${pKa}, 'thermodynamic', '25', 'forged for a test', true, false, now(), true`);
  await db.execute(sql`update settings set value = 'another library' where key = 'library'`);
}

/** Every name of the library by which a compound can be asked for. */
export async function allNames(db: Db): Promise<{ compound: string; kind: string; shown: string }[]> {
  return readRows(
    db,
    z.object({ compound: z.string(), kind: z.string(), shown: z.string() }),
    sql`select compound_id as compound, kind, shown from compound_names order by compound_id, kind, shown`,
  );
}

/** A new session of the person with that e-mail. */
export async function signInByEmail(db: Db, email: string): Promise<{ personId: string; sessionId: string }> {
  const sessionId = newId();
  const [person] = await readRows(
    db,
    z.object({ id: z.string() }),
    sql`insert into session (id, token, user_id, expires_at) select ${sessionId}, ${newId()}, id, now() + interval '1 hour'
      from "user" where email = ${email} returning user_id as id`,
  );
  if (person === undefined) throw new Error(`Nobody has the e-mail ${email}.`);
  return { personId: person.id, sessionId };
}
