"use client";
import { zodResolver } from "@hookform/resolvers/zod";
import { useRouter } from "next/navigation";
import { useState } from "react";
import { Controller, useForm } from "react-hook-form";
import type { z } from "zod";
import { Button } from "../../../../../components/ui/button.tsx";
import { CheckField } from "../../../../../components/ui/check-field.tsx";
import { Says } from "../../../../../components/ui/says.tsx";
import { TextField } from "../../../../../components/ui/text-field.tsx";
import { type Answered, showProblem } from "../../../../_components/answered.ts";
import { invitation, ROLE_NAMES } from "../schema.ts";

type Form = z.infer<typeof invitation>;
const empty: Form = { printedName: "", email: "", roles: [] };

export function InviteForm({ invite }: { invite: (raw: unknown) => Promise<Answered<unknown>> }) {
  const router = useRouter();
  const [invited, setInvited] = useState<string | null>(null);
  const form = useForm<Form>({ resolver: zodResolver(invitation), defaultValues: empty });
  const { errors, isSubmitting } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    setInvited(null);
    const answered = await invite(values);
    if (!answered.ok) return showProblem(form, answered.problem, ["printedName", "email", "roles"]);
    setInvited(values.email);
    form.reset(empty);
    router.refresh();
  });
  return (
    <form className="sign" onSubmit={submit} noValidate>
      {errors.root ? (
        <Says kind="stop" urgent>
          {errors.root.message}
        </Says>
      ) : null}
      <TextField
        label="Printed name"
        autoComplete="off"
        error={errors.printedName?.message}
        {...form.register("printedName")}
      />
      <TextField
        label="E-mail"
        type="email"
        autoComplete="off"
        error={errors.email?.message}
        {...form.register("email")}
      />
      <Controller
        control={form.control}
        name="roles"
        render={({ field }) => (
          <fieldset className="f">
            <legend className="l">Roles</legend>
            {ROLE_NAMES.map((role) => (
              <CheckField
                key={role}
                checked={field.value.includes(role)}
                onChange={(ticked) =>
                  field.onChange(ticked ? [...field.value, role] : field.value.filter((each) => each !== role))
                }
              >
                {role}
              </CheckField>
            ))}
          </fieldset>
        )}
      />
      <Button type="submit" kind="first" pending={isSubmitting} pendingWords="Inviting">
        Send an invitation
      </Button>
      {invited === null ? null : (
        <Says kind="good" finding={`The link is on its way to ${invited}.`} urgent>
          It works once, for three days. They choose their own password.
        </Says>
      )}
    </form>
  );
}
