import type { Metadata } from "next";
import { EntryLeaf } from "../_page/entry-leaf.tsx";

type Props = { params: Promise<{ label: string }> };

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: (await params).label };
}

export default async function EntryPage({ params }: Props) {
  const { label } = await params;
  return <EntryLeaf label={label} />;
}
