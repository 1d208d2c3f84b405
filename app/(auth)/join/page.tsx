import type { Metadata } from "next";
import Link from "next/link";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { Says } from "../../../components/ui/says.tsx";
import { Refused } from "../../../db/errors.ts";
import { readInvitation } from "../../../db/invitations.ts";
import { database } from "../../_server/database.ts";
import { JoinForm } from "./_components/join-form.tsx";
import { takePlace } from "./actions.ts";

export const metadata: Metadata = { title: "Join" };

export default async function JoinPage({ searchParams }: { searchParams: Promise<{ code?: string | string[] }> }) {
  const { code } = await searchParams;
  const invited = typeof code === "string" ? await invitationOf(code) : null;
  return (
    <Leaf className="small">
      {invited === null || typeof code !== "string" ? (
        <>
          <LeafTitle>This link does not work</LeafTitle>
          <Says kind="stop" finding="It was used already, it has run out, or a part of it is missing.">
            Ask whoever invited you for a new one. <Link href="/sign-in">Sign in</Link> if you have a password.
          </Says>
        </>
      ) : (
        <>
          <LeafTitle under="You choose it yourself; nobody else knows it or can look it up.">
            {invited.printedName === null ? "Make the first account" : `Welcome, ${invited.printedName}`}
          </LeafTitle>
          <JoinForm
            code={code}
            known={
              invited.printedName === null || invited.email === null
                ? null
                : { printedName: invited.printedName, email: invited.email }
            }
            join={takePlace}
          />
        </>
      )}
    </Leaf>
  );
}

async function invitationOf(code: string) {
  try {
    return await readInvitation(await database(), code);
  } catch (error) {
    if (error instanceof Refused) return null;
    throw error;
  }
}
