"use client";
import type { Answered } from "../../../_components/answered.ts";
import { NewPasswordForm } from "../../_components/new-password-form.tsx";

type Props = {
  code: string;
  known: { printedName: string; email: string } | null;
  join: (raw: unknown) => Promise<Answered<unknown>>;
};

export function JoinForm({ code, known, join }: Props) {
  return (
    <NewPasswordForm
      known={known}
      asksIdentity={known === null}
      words="Take this password and sign in"
      send={({ password, printedName, email }) =>
        join(known === null ? { code, password, printedName, email } : { code, password })
      }
      then="/desk"
    />
  );
}
