import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { EntryLeaf } from "../../_page/entry-leaf.tsx";

type Props = { params: Promise<{ label: string; revision: string }> };

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  const { label, revision } = await params;
  return { title: `${label}, revision ${revision}` };
}

export default async function RevisionPage({ params }: Props) {
  const { label, revision } = await params;
  if (!/^[1-9]\d{0,5}$/.test(revision)) notFound();
  return <EntryLeaf label={label} revision={Number(revision)} />;
}
