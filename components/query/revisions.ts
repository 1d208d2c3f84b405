// What a browser asks about a revision beside its live page.
import { queryOptions } from "@tanstack/react-query";
import { z } from "zod";
import { getJson } from "./http.ts";

const strayShape = z.object({ updates: z.array(z.object({ id: z.string(), at: z.string(), text: z.string() })) });
export type StrayUpdate = z.infer<typeof strayShape>["updates"][number];

/** What this person sent when the revision was no longer a draft, oldest first: theirs to copy. */
export const strayQuery = (revisionId: string) =>
  queryOptions({
    queryKey: ["revision", revisionId, "stray"],
    queryFn: ({ signal }) => getJson(`/api/revisions/${encodeURIComponent(revisionId)}/stray`, strayShape, signal),
    select: (answer) => answer.updates,
  });
