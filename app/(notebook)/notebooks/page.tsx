import type { Metadata } from "next";
import Link from "next/link";
import { formatCount } from "../../../components/format.ts";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { EmptyState } from "../../../components/ui/empty-state.tsx";
import { PlainTable } from "../../../components/ui/plain-table.tsx";
import { listNotebooks } from "../../../db/notebooks.ts";
import { readForPage } from "../../_server/page-read.ts";

export const metadata: Metadata = { title: "Notebooks" };

export default async function NotebooksPage() {
  const { read: notebooks } = await readForPage((actor, db) => listNotebooks(db, actor));
  const [only] = notebooks;
  return (
    <Leaf className="wide">
      <LeafTitle under="The notebooks whose member you are.">
        {notebooks.length === 1
          ? `One notebook is open to you`
          : `${formatCount(notebooks.length)} notebooks are open to you`}
      </LeafTitle>
      {only === undefined ? (
        <EmptyState finding="You are not a member of a notebook yet.">
          An administrator adds people to notebooks. Say in which one you work.
        </EmptyState>
      ) : (
        <PlainTable
          caption="Notebooks"
          captionHidden
          columns={[
            { id: "code", head: "Code", kind: "mono" },
            { id: "title", head: "Notebook", names: true },
            { id: "about", head: "What it is for" },
            { id: "entries", head: "Entries", kind: "number" },
          ]}
          rows={notebooks.map(({ id, code, title, about, entries }) => ({
            key: id,
            cells: [
              code,
              <Link key="to" href={`/notebooks/${code}`}>
                {title}
              </Link>,
              about,
              String(entries),
            ],
          }))}
        />
      )}
    </Leaf>
  );
}
