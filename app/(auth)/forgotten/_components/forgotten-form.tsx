"use client";
import { zodResolver } from "@hookform/resolvers/zod";
import Link from "next/link";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { Button } from "../../../../components/ui/button.tsx";
import { Says } from "../../../../components/ui/says.tsx";
import { TextField } from "../../../../components/ui/text-field.tsx";
import { type Answered, showProblem } from "../../../_components/answered.ts";
import { forgottenInput } from "../schema.ts";

export function ForgottenForm({ ask }: { ask: (raw: unknown) => Promise<Answered<unknown>> }) {
  const form = useForm<z.infer<typeof forgottenInput>>({
    resolver: zodResolver(forgottenInput),
    defaultValues: { email: "" },
  });
  const { errors, isSubmitting, isSubmitSuccessful } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    const answered = await ask(values);
    if (!answered.ok) showProblem(form, answered.problem, ["email"]);
  });
  if (isSubmitSuccessful && !errors.root && !errors.email) {
    return (
      <Says kind="good" finding="If there is such an account, the link is on its way." urgent>
        Look into your mail. <Link href="/sign-in">Back to sign in</Link>
      </Says>
    );
  }
  return (
    <form className="sign" onSubmit={submit} noValidate>
      {errors.root ? (
        <Says kind="stop" urgent>
          {errors.root.message}
        </Says>
      ) : null}
      <TextField
        label="E-mail"
        type="email"
        autoComplete="username"
        error={errors.email?.message}
        {...form.register("email")}
      />
      <Button type="submit" kind="first" pending={isSubmitting} pendingWords="Sending">
        Send the link
      </Button>
      <p className="note">
        <Link href="/sign-in">Back to sign in</Link>
      </p>
    </form>
  );
}
