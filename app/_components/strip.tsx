"use client";
import { type Place, Places } from "../../components/leaf/places.tsx";
import type { Answered } from "./answered.ts";

type Props = {
  places: Place[];
  person: { name: string; roles: string };
  leave: () => Promise<Answered<unknown>>;
};

export function Strip({ places, person, leave }: Props) {
  return (
    <Places
      places={places}
      person={{ ...person, accountHref: "/account" }}
      onSignOut={async () => {
        await leave();
        // A new document, not a soft change of page: nothing of this person's stays in memory.
        window.location.assign("/sign-in");
      }}
    />
  );
}
