"use client";
import { zodResolver } from "@hookform/resolvers/zod";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { Button } from "../../../../components/ui/button.tsx";
import { Says } from "../../../../components/ui/says.tsx";
import { TextField } from "../../../../components/ui/text-field.tsx";
import { type Answered, showProblem } from "../../../_components/answered.ts";
import { passwordChange } from "../schema.ts";

const empty = { currentPassword: "", newPassword: "", again: "" };

export function PasswordForm({ save }: { save: (raw: unknown) => Promise<Answered<unknown>> }) {
  const form = useForm<z.infer<typeof passwordChange>>({ resolver: zodResolver(passwordChange), defaultValues: empty });
  const { errors, isSubmitting, isSubmitSuccessful } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    const answered = await save(values);
    if (answered.ok) form.reset(empty, { keepIsSubmitSuccessful: true });
    else showProblem(form, answered.problem, ["currentPassword", "newPassword"]);
  });
  return (
    <form className="sign" onSubmit={submit} noValidate>
      {errors.root ? (
        <Says kind="stop" urgent>
          {errors.root.message}
        </Says>
      ) : null}
      <TextField
        label="Password now"
        type="password"
        autoComplete="current-password"
        error={errors.currentPassword?.message}
        {...form.register("currentPassword")}
      />
      <TextField
        label="New password"
        type="password"
        autoComplete="new-password"
        hint="At least 12 characters. Several words do well; pasting is allowed."
        error={errors.newPassword?.message}
        {...form.register("newPassword")}
      />
      <TextField
        label="The same again"
        type="password"
        autoComplete="new-password"
        error={errors.again?.message}
        {...form.register("again")}
      />
      <Button type="submit" pending={isSubmitting} pendingWords="Changing it">
        Change the password
      </Button>
      {isSubmitSuccessful && Object.keys(errors).length === 0 ? (
        <Says kind="good" finding="The password is changed." urgent>
          Your other sessions have ended.
        </Says>
      ) : null}
    </form>
  );
}
