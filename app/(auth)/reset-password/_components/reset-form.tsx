"use client";
import type { Answered } from "../../../_components/answered.ts";
import { NewPasswordForm } from "../../_components/new-password-form.tsx";

export function ResetForm({ token, set }: { token: string; set: (raw: unknown) => Promise<Answered<unknown>> }) {
  return (
    <NewPasswordForm
      known={null}
      asksIdentity={false}
      words="Set the new password"
      send={async ({ password }) => atPassword(await set({ token, newPassword: password }))}
      then="/sign-in"
    />
  );
}

/** The server calls the field newPassword, this form password. */
function atPassword(answered: Answered<unknown>): Answered<unknown> {
  const sentence = answered.ok ? undefined : answered.problem.fields?.newPassword;
  return answered.ok || sentence === undefined
    ? answered
    : { ok: false, problem: { ...answered.problem, fields: { password: sentence } } };
}
