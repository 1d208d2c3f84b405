"use client";
import { zodResolver } from "@hookform/resolvers/zod";
import { useRouter } from "next/navigation";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { Button } from "../../../../../components/ui/button.tsx";
import { Says } from "../../../../../components/ui/says.tsx";
import { TextArea, TextField } from "../../../../../components/ui/text-field.tsx";
import { type Answered, showProblem } from "../../../../_components/answered.ts";
import { notebookInput } from "../schema.ts";

const empty = { code: "", title: "", about: "" };

export function NotebookForm({ make }: { make: (raw: unknown) => Promise<Answered<unknown>> }) {
  const router = useRouter();
  const form = useForm<z.infer<typeof notebookInput>>({ resolver: zodResolver(notebookInput), defaultValues: empty });
  const { errors, isSubmitting } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    const answered = await make(values);
    if (!answered.ok) return showProblem(form, answered.problem, ["code", "title", "about"]);
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
        label="Code"
        hint="Stands before each entry's number: DSB-0042."
        autoComplete="off"
        error={errors.code?.message}
        {...form.register("code")}
      />
      <TextField label="Title" autoComplete="off" error={errors.title?.message} {...form.register("title")} />
      <TextArea
        label="What it is for"
        aside="not required"
        rows={2}
        error={errors.about?.message}
        {...form.register("about")}
      />
      <Button type="submit" kind="first" pending={isSubmitting} pendingWords="Making it">
        Make the notebook
      </Button>
    </form>
  );
}
