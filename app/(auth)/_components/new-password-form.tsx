"use client";
// A new password, typed twice: after a reset, and when a person joins (then with the name they sign with, where the invitation
// does not give it).
import { zodResolver } from "@hookform/resolvers/zod";
import { useForm } from "react-hook-form";
import { Button } from "../../../components/ui/button.tsx";
import { Says } from "../../../components/ui/says.tsx";
import { TextField } from "../../../components/ui/text-field.tsx";
import { type Answered, showProblem } from "../../_components/answered.ts";
import { type NewPassword, newPassword } from "./new-password.ts";

type Props = {
  /** who they are, when the invitation says so; otherwise they write it */
  known: { printedName: string; email: string } | null;
  asksIdentity: boolean;
  words: string;
  send: (values: NewPassword) => Promise<Answered<unknown>>;
  /** where to go afterwards */
  then: string;
};

export function NewPasswordForm({ known, asksIdentity, words, send, then }: Props) {
  const form = useForm<NewPassword>({
    resolver: zodResolver(newPassword(asksIdentity)),
    defaultValues: { password: "", again: "", printedName: known?.printedName ?? "", email: known?.email ?? "" },
  });
  const { errors, isSubmitting, isSubmitSuccessful } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    const answered = await send(values);
    if (answered.ok) window.location.assign(then);
    else showProblem(form, answered.problem, ["password", "printedName", "email"]);
  });
  return (
    <form className="sign" onSubmit={submit} noValidate>
      {errors.root ? (
        <Says kind="stop" urgent>
          {errors.root.message}
        </Says>
      ) : null}
      {asksIdentity ? (
        <>
          <TextField
            label="Name"
            hint="As it is printed beside your signatures, such as R. Okafor."
            autoComplete="name"
            error={errors.printedName?.message}
            {...form.register("printedName")}
          />
          <TextField
            label="E-mail"
            type="email"
            autoComplete="username"
            error={errors.email?.message}
            {...form.register("email")}
          />
        </>
      ) : null}
      <TextField
        label="New password"
        type="password"
        autoComplete="new-password"
        hint="At least 12 characters. Several words do well; pasting is allowed."
        error={errors.password?.message}
        {...form.register("password")}
      />
      <TextField
        label="The same again"
        type="password"
        autoComplete="new-password"
        error={errors.again?.message}
        {...form.register("again")}
      />
      <Button
        type="submit"
        kind="first"
        pending={isSubmitting || (isSubmitSuccessful && !errors.root && !errors.password)}
        pendingWords="Setting it"
      >
        {words}
      </Button>
    </form>
  );
}
