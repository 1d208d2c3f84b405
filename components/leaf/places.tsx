"use client";
// The strip over the leaf: the name, the places as words on the desk, and who is there. The current place bites a thumb
// notch into the leaf under it. On a phone the places fold into one word.
import Link from "next/link";
import { usePathname } from "next/navigation";
import type { ReactNode } from "react";
import { Menu, type MenuAct } from "../ui/menu.tsx";
import { Wordmark } from "./wordmark.tsx";

export type Place = {
  href: string;
  label: string;
  /** Addresses below these belong to the place too: "/entries" to Notebooks. */
  also?: readonly string[];
  /** How many things wait there. */
  waiting?: number;
};

type PlacesProps = {
  places: readonly Place[];
  person: { name: string; roles: string; accountHref?: string };
  /** Called by "Sign out". */
  onSignOut: () => void | Promise<void>;
  home?: string;
  /** More at the right end, such as a note that this is the demo. */
  children?: ReactNode;
};

export function Places({ places, person, onSignOut, home = "/desk", children }: PlacesProps) {
  const path = usePathname() ?? "";
  const current = places.find((place) => isIn(path, place));
  const folded: MenuAct[] = [
    ...places.map((place) => ({
      id: place.href,
      label: place.label,
      href: place.href,
      current: place === current,
      aside: place.waiting ? String(place.waiting) : undefined,
    })),
    ...(person.accountHref
      ? [{ id: "account", label: person.name, href: person.accountHref, aside: "your account" }]
      : []),
    { id: "sign-out", label: "Sign out" },
  ];
  return (
    <header className="strip">
      <Wordmark href={home} />
      <nav className="places" aria-label="Places">
        {places.map((place) => (
          <Link key={place.href} href={place.href} aria-current={place === current ? "page" : undefined}>
            {place.label}
            {place.waiting ? (
              <span className="count">
                {place.waiting}
                <span className="away"> waiting</span>
              </span>
            ) : null}
          </Link>
        ))}
      </nav>
      <div className="who">
        {children}
        <span>
          <b>{person.accountHref ? <Link href={person.accountHref}>{person.name}</Link> : person.name}</b>
          <small>{person.roles}</small>
        </span>
        <button type="button" className="quiet" onClick={() => void onSignOut()}>
          Sign out
        </button>
      </div>
      <div className="folded">
        <Menu
          kind="quiet"
          label={`Places, now ${current?.label ?? "elsewhere"}`}
          acts={folded}
          onAct={(id) => {
            if (id === "sign-out") void onSignOut();
          }}
        >
          {current?.label ?? "Places"}
        </Menu>
      </div>
    </header>
  );
}

function isIn(path: string, place: Place): boolean {
  return [place.href, ...(place.also ?? [])].some((each) => path === each || path.startsWith(`${each}/`));
}
