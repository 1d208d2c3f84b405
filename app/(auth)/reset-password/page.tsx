import type { Metadata } from "next";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { ResetForm } from "./_components/reset-form.tsx";
import { setPassword } from "./actions.ts";

export const metadata: Metadata = { title: "New password" };

export default async function ResetPage({ searchParams }: { searchParams: Promise<{ token?: string | string[] }> }) {
  const { token } = await searchParams;
  return (
    <Leaf className="small">
      <LeafTitle under="Every session of yours ends; sign in again with the new one.">Choose a new password</LeafTitle>
      <ResetForm token={typeof token === "string" ? token : ""} set={setPassword} />
    </Leaf>
  );
}
