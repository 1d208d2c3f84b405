"use client";
// E-mail and password: on the sign-in leaf, and over a page whose session has ended.
import { zodResolver } from "@hookform/resolvers/zod";
import Link from "next/link";
import { useForm } from "react-hook-form";
import { Button } from "../../components/ui/button.tsx";
import { Says } from "../../components/ui/says.tsx";
import { TextField } from "../../components/ui/text-field.tsx";
import { type SignInForm as Form, signInInput } from "../(auth)/sign-in/schema.ts";
import { type Answered, showProblem } from "./answered.ts";

type Props = {
  /** Written into the form at first. */
  filled?: { email: string; password: string } | null;
  enter: (raw: unknown) => Promise<Answered<unknown>>;
  onEntered: () => void;
};

export function SignInForm({ filled, enter, onEntered }: Props) {
  const form = useForm<Form>({
    resolver: zodResolver(signInInput),
    defaultValues: filled ?? { email: "", password: "" },
  });
  const { errors, isSubmitting, isSubmitSuccessful } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    const answered = await enter(values);
    if (answered.ok) return onEntered();
    form.resetField("password", { defaultValue: "" });
    showProblem(form, answered.problem, ["email", "password"]);
  });
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
      <TextField
        label="Password"
        type="password"
        autoComplete="current-password"
        error={errors.password?.message}
        {...form.register("password")}
      />
      <Button
        type="submit"
        kind="first"
        pending={isSubmitting || (isSubmitSuccessful && !errors.root)}
        pendingWords="Signing in"
      >
        Sign in
      </Button>
      <p className="note">
        <Link href="/forgotten">Forgotten password</Link>
      </p>
    </form>
  );
}
