import { headers } from "next/headers";
import { redirect } from "next/navigation";
import type { ReactNode } from "react";
import type { Actor, Role } from "../../db/policy.ts";
import { Strip } from "../_components/strip.tsx";
import { pageActor } from "../_server/actor.ts";
import { settings } from "../_server/env.ts";
import { leave } from "./actions.ts";

/** The strip over every leaf: the places that are there for this person. Strangers are sent to the door and come back. */
export default async function NotebookLayout({ children }: { children: ReactNode }) {
  const actor = await pageActor();
  if (actor === null) redirect(`/sign-in?to=${encodeURIComponent((await headers()).get("x-path") ?? "/desk")}`);
  return (
    <>
      <Strip
        places={placesOf(actor)}
        person={{ name: actor.printedName, roles: actor.roles.join(", ") || "no role yet" }}
        leave={leave}
      />
      {children}
      {settings().demo ? (
        <footer className="demo-line">
          Demo laboratory: people, lots, instruments and readings are made up. Constants are published values with their
          source.
        </footer>
      ) : null}
    </>
  );
}

const readers: readonly Role[] = ["researcher", "witness", "supervisor"];

function placesOf(actor: Actor) {
  const reads = actor.roles.some((role) => readers.includes(role));
  return [
    { href: "/desk", label: "Desk" },
    ...(reads
      ? [
          { href: "/notebooks", label: "Notebooks", also: ["/entries"] },
          { href: "/search", label: "Search" },
        ]
      : []),
    ...(actor.roles.includes("administrator") ? [{ href: "/administration", label: "Administration" }] : []),
  ];
}
