"use client";
// The sign-in form; in the demo the invented people stand under it, and pressing one fills the form in.
import { useState } from "react";
import type { Answered } from "../../../_components/answered.ts";
import { SignInForm } from "../../../_components/sign-in-form.tsx";

type DemoPerson = { printedName: string; email: string; password: string; roles: string[]; about: string };
type Props = { people: DemoPerson[]; next: string; enter: (raw: unknown) => Promise<Answered<unknown>> };

export function DemoDoor({ people, next, enter }: Props) {
  const [filled, setFilled] = useState<{ email: string; password: string } | null>(null);
  return (
    <>
      {/* A new key makes a new form with the person's values in it. */}
      <SignInForm
        key={filled?.email ?? ""}
        filled={filled}
        enter={enter}
        onEntered={() => window.location.assign(next)}
      />
      {people.length === 0 ? null : (
        <section className="demo-people" aria-labelledby="demo-people">
          <h2 id="demo-people" className="lab">
            The demo laboratory
          </h2>
          <p className="note">Its people, lots and readings are made up. Press a name to fill the form in.</p>
          <ul>
            {people.map((person) => (
              <li key={person.email}>
                <button
                  type="button"
                  className="quiet"
                  onClick={() => setFilled({ email: person.email, password: person.password })}
                >
                  {person.printedName}
                </button>
                <span className="faint">{person.about}</span>
              </li>
            ))}
          </ul>
        </section>
      )}
    </>
  );
}
