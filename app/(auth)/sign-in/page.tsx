import type { Metadata } from "next";
import { redirect } from "next/navigation";
import { Leaf } from "../../../components/leaf/leaf.tsx";
import { WordmarkOnly } from "../../../components/leaf/wordmark.tsx";
import demoPeople from "../../../db/seed/demo-people.json" with { type: "json" };
import { pageActor } from "../../_server/actor.ts";
import { settings } from "../../_server/env.ts";
import { DemoDoor } from "./_components/demo-door.tsx";
import { enter } from "./actions.ts";

export const metadata: Metadata = { title: "Sign in" };

export default async function SignInPage({ searchParams }: { searchParams: Promise<{ to?: string | string[] }> }) {
  const { to } = await searchParams;
  const next = ownPath(to);
  if ((await pageActor()) !== null) redirect(next);
  return (
    <Leaf className="small">
      <h1 className="door-name">
        <WordmarkOnly large />
      </h1>
      <p className="under-title">
        A shared laboratory notebook. What is written here is signed, countersigned and kept.
      </p>
      <DemoDoor people={settings().demo ? demoPeople : []} next={next} enter={enter} />
    </Leaf>
  );
}

/** Only a path of our own: never another site's address that somebody put into a link. */
function ownPath(to: string | string[] | undefined): string {
  return typeof to === "string" && /^\/(?![/\\])[\w\-./?=&%~:+,]*$/.test(to) && !to.startsWith("/sign-in")
    ? to
    : "/desk";
}
