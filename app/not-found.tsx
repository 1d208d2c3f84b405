import type { Metadata } from "next";
import Link from "next/link";
import { Leaf, LeafTitle } from "../components/leaf/leaf.tsx";

export const metadata: Metadata = { title: "Not found" };

export default function NotFound() {
  return (
    <Leaf className="small">
      <LeafTitle>There is nothing here for you</LeafTitle>
      <p>Either there is no such page, or it is not open to you; the two are answered alike.</p>
      <p>
        <Link href="/desk">Go to your desk</Link>
      </p>
    </Leaf>
  );
}
