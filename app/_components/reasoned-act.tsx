"use client";
// An act of an administrator's that needs a reason: a button, and a dialog that asks for it.
import { zodResolver } from "@hookform/resolvers/zod";
import { useRouter } from "next/navigation";
import { type ReactNode, useState } from "react";
import { useForm } from "react-hook-form";
import { z } from "zod";
import { Button } from "../../components/ui/button.tsx";
import type { ButtonKind } from "../../components/ui/button-class.ts";
import { Dialog } from "../../components/ui/dialog.tsx";
import { Says } from "../../components/ui/says.tsx";
import { TextArea } from "../../components/ui/text-field.tsx";
import { type Answered, showProblem } from "./answered.ts";

const reasoned = z.object({
  reason: z
    .string()
    .trim()
    .min(3, { error: "Write why, in a few words." })
    .max(500, { error: "At most 500 characters." }),
});

type Props = {
  words: string;
  kind?: ButtonKind;
  /** The dialog's question. */
  title: string;
  /** What it means. */
  children: ReactNode;
  /** Words of the button that does it. */
  doWords: string;
  stops?: boolean;
  label?: string;
  act: (reason: string) => Promise<Answered<unknown>>;
};

export function ReasonedAct({ words, kind = "quiet", title, children, doWords, stops, label = "Reason", act }: Props) {
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const form = useForm<z.infer<typeof reasoned>>({ resolver: zodResolver(reasoned), defaultValues: { reason: "" } });
  const { errors, isSubmitting } = form.formState;
  const close = () => {
    setOpen(false);
    form.reset();
  };
  const submit = form.handleSubmit(async ({ reason }) => {
    const answered = await act(reason);
    if (!answered.ok) return showProblem(form, answered.problem, ["reason"]);
    close();
    router.refresh();
  });
  return (
    <>
      <Button kind={kind} onClick={() => setOpen(true)}>
        {words}
      </Button>
      <Dialog
        open={open}
        onClose={close}
        title={title}
        busy={isSubmitting}
        actions={
          <>
            <Button kind={stops ? "stop" : "first"} pending={isSubmitting} onClick={submit}>
              {doWords}
            </Button>
            <Button kind="quiet" onClick={close}>
              Leave it
            </Button>
          </>
        }
      >
        {children}
        {errors.root ? (
          <Says kind="stop" urgent>
            {errors.root.message}
          </Says>
        ) : null}
        <TextArea label={label} rows={2} error={errors.reason?.message} {...form.register("reason")} />
      </Dialog>
    </>
  );
}
