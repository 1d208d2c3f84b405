import { notFound } from "next/navigation";
import type { ReactNode } from "react";
import { may } from "../../../db/policy.ts";
import { pageActor } from "../../_server/actor.ts";

/** Whoever is no administrator finds nothing here, as at any address that is not there. */
export default async function AdministrationLayout({ children }: { children: ReactNode }) {
  const actor = await pageActor();
  if (actor === null || !may(actor, "people.list", null)) notFound();
  return children;
}
