import type { Metadata } from "next";
import Link from "next/link";
import { formatCount, formatDate, formatDateTime, formatPh } from "../../../components/format.ts";
import { Counterfoil, StubHead, StubSection } from "../../../components/leaf/counterfoil.tsx";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { StateMark } from "../../../components/leaf/state-mark.tsx";
import { buttonClass } from "../../../components/ui/button-class.ts";
import { EmptyState } from "../../../components/ui/empty-state.tsx";
import { PlainTable } from "../../../components/ui/plain-table.tsx";
import { Says } from "../../../components/ui/says.tsx";
import type { Db } from "../../../db/client.ts";
import { expansion } from "../../../db/compounds.ts";
import type { Actor } from "../../../db/policy.ts";
import { countEntries, type SearchHit, type SearchQuery, searchChoices, searchEntries } from "../../../db/search.ts";
import { STATES } from "../../../db/states.ts";
import { readForPage } from "../../_server/page-read.ts";
import { searchAddress } from "../../api/search/csv/schema.ts";
import { SearchForm } from "./_components/search-form.tsx";

export const metadata: Metadata = { title: "Search" };

type Asked = Record<string, string>;
type Props = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function SearchPage({ searchParams }: Props) {
  const asked: Asked = Object.fromEntries(
    Object.entries(await searchParams).flatMap(([name, value]) => (typeof value === "string" ? [[name, value]] : [])),
  );
  const { after, ...address } = asked;
  const { actor, read } = await readForPage((person, db) => readSearch(db, person, address, after));
  const { choices, faults, found } = read;
  return (
    <Leaf
      counterfoil={
        found === null ? <LookedThrough notebooks={choices.notebooks} /> : <FoundStub found={found} address={address} />
      }
    >
      <LeafTitle under="All entries that you may read, by what was poured in, by words, and by who and when.">
        Search
      </LeafTitle>
      <SearchForm
        asked={address}
        compound={found?.expanded?.compound ?? null}
        choices={choices}
        states={STATES}
        faults={faults}
      />
      {found === null ? null : (
        <Hits
          found={found}
          address={address}
          timeZone={actor.timeZone}
          decimalSign={actor.decimalSign}
          isFirst={after === undefined}
        />
      )}
    </Leaf>
  );
}

type Found = NonNullable<Awaited<ReturnType<typeof readSearch>>["found"]>;

async function readSearch(db: Db, actor: Actor, address: Asked, after: string | undefined) {
  const choices = await searchChoices(db, actor);
  const parsed = searchAddress.safeParse(address);
  if (!parsed.success) {
    const faults = Object.fromEntries(parsed.error.issues.map(({ path, message }) => [path.join("."), message]));
    return { choices, faults, found: null };
  }
  if (Object.values(address).every((value) => value === "")) return { choices, faults: {}, found: null };
  const query: SearchQuery = parsed.data;
  const page = await searchEntries(db, actor, { query, after });
  return {
    choices,
    faults: {},
    found: {
      ...page,
      total: await countEntries(db, actor, query),
      expanded: query.compound === undefined ? null : await expansion(db, query.compound),
      isNarrowed: (query.narrow ?? []).length > 0,
    },
  };
}

/** Before anything is asked: what is looked through. */
function LookedThrough({ notebooks }: { notebooks: Awaited<ReturnType<typeof searchChoices>>["notebooks"] }) {
  return (
    <Counterfoil>
      <StubSection title="Looked through">
        {notebooks.length === 0 ? <p className="note">No notebook: you are a member of none.</p> : null}
        <ul className="plain">
          {notebooks.map(({ id, code, title }) => (
            <li key={id}>
              <Link href={`/notebooks/${code}`}>{code}</Link> {title}
            </li>
          ))}
        </ul>
        <p className="note">Every revision in them, drafts too. Nothing of other notebooks is found or counted.</p>
      </StubSection>
    </Counterfoil>
  );
}

function FoundStub({ found, address }: { found: Found; address: Asked }) {
  const { expanded, isNarrowed, total } = found;
  return (
    <Counterfoil
      head={
        <StubHead
          number={formatCount(total)}
          of={
            expanded === null
              ? "entries you may read fit"
              : `entries you may read in which ${expanded.compound.name} was recognised`
          }
        />
      }
    >
      {expanded === null ? null : (
        <StubSection title={isNarrowed ? "Narrowed to this one" : "Taken in"}>
          {isNarrowed ? (
            <p>
              Only <b>{expanded.compound.name}</b> itself.{" "}
              <Link href={addressOf({ ...address, narrow: "" })}>Take its salts, hydrates and other forms in</Link>
            </p>
          ) : (
            <>
              <p>
                <b>{expanded.families.map(({ name }) => name).join(", ") || expanded.compound.name}</b>, with{" "}
                {expanded.compounds.length} forms, salts, hydrates and solutions.
              </p>
              <details>
                <summary>Which ones</summary>
                <ul className="plain">
                  {expanded.compounds.map(({ id, name, kind }) => (
                    <li key={id}>
                      {name} <span className="faint">{kind}</span>
                    </li>
                  ))}
                </ul>
              </details>
            </>
          )}
          {expanded.separate.map(({ id, name, note }) => (
            <p key={id} className="note">
              Not taken in: <Link href={addressOf({ compound: id })}>{name}</Link>. {note}
            </p>
          ))}
        </StubSection>
      )}
      <StubSection title="Take away">
        <a className={buttonClass("plain")} href={`/api/search/csv?${new URLSearchParams(address)}`} download>
          Table as CSV
        </a>
        <p className="note">
          As of {formatDateTime(found.asOf)}. The index, the names known and your rights bound what is found.
        </p>
      </StubSection>
    </Counterfoil>
  );
}

type HitsProps = { found: Found; address: Asked; timeZone: string; decimalSign: "." | ","; isFirst: boolean };

function Hits({ found, address, timeZone, decimalSign, isFirst }: HitsProps) {
  if (found.hits.length === 0) {
    return (
      <EmptyState finding={isFirst ? "No entry that you may read fits." : "There are no older ones."}>
        Take a filter away, or look the compound up by another name, its CAS number or its formula.
      </EmptyState>
    );
  }
  return (
    <>
      <PlainTable
        className="tight"
        caption={`${formatCount(found.total)} ${found.total === 1 ? "entry" : "entries"}, newest first`}
        columns={[
          { id: "label", head: "Entry", kind: "mono" },
          { id: "title", head: "Title, and the line it stands in", names: true },
          { id: "role", head: "As" },
          { id: "calculated", head: "pH", unit: "calculated", kind: "number" },
          { id: "measured", head: "pH", unit: "measured", kind: "number" },
          { id: "author", head: "Author" },
          { id: "recorded", head: "Recorded" },
          { id: "state", head: "State" },
        ]}
        decimalSign={decimalSign}
        rows={found.hits.map((hit) => ({
          key: `${hit.entryId}.${hit.revision}`,
          cells: cellsOf(hit, timeZone, decimalSign),
        }))}
      />
      {found.next === null ? null : (
        <p>
          <Link className={buttonClass("plain")} href={addressOf({ ...address, after: found.next })}>
            Show the next ones
          </Link>
        </p>
      )}
      {found.hits.some((hit) => hit.calculatedPH.length > 0) ? (
        <Says kind="info">
          A calculated pH is an estimate from a stated model, which stands on the page; the safety data sheet, local
          rules and a licensed professional’s judgement come first.
        </Says>
      ) : null}
    </>
  );
}

function cellsOf(hit: SearchHit, timeZone: string, decimalSign: "." | ",") {
  const address = `/entries/${hit.label}${hit.isNewest ? "" : `/${hit.revision}`}`;
  const [calculated] = hit.calculatedPH;
  const [measured] = hit.measuredPH;
  return [
    <Link key="label" href={address}>
      {hit.label}
    </Link>,
    <span key="title">
      <Link href={address} className={hit.state === "voided" ? "written struck" : "written"}>
        {hit.title || "Without a title"}
      </Link>
      {hit.lines.map(({ line }, place) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: equal lines may stand twice, and a hit's lines are never reordered
        <small key={`${place}.${line}`} className="hit-line">
          {line}
        </small>
      ))}
      {hit.moreLines > 0 ? <small className="hit-line">and {hit.moreLines} more</small> : null}
    </span>,
    [...new Set(hit.lines.map(({ role }) => role))].join(", "),
    calculated === undefined ? "" : formatPh(calculated, 2, decimalSign),
    measured === undefined ? "" : formatPh(measured, 2, decimalSign),
    <span key="author" className="nowrap">
      {hit.author.name}
    </span>,
    formatDate(hit.recordedAt, timeZone),
    <span key="state">
      <StateMark state={hit.state} />
      {hit.isNewest ? null : <small className="hit-line">revision {hit.revision}, not the newest</small>}
    </span>,
  ];
}

function addressOf(asked: Asked): string {
  return `/search?${new URLSearchParams(Object.entries(asked).filter(([, value]) => value !== ""))}`;
}
