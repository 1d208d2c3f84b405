"use client";
// The author's signature: meaning in words, who signs, password, and what changed when somebody typed meanwhile.
import { zodResolver } from "@hookform/resolvers/zod";
import { useRouter } from "next/navigation";
import type { ReactNode } from "react";
import { useForm } from "react-hook-form";
import { z } from "zod";
import { StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { StateMark } from "../../../../components/leaf/state-mark.tsx";
import { Button } from "../../../../components/ui/button.tsx";
import { Says } from "../../../../components/ui/says.tsx";
import { TextField } from "../../../../components/ui/text-field.tsx";
import { showProblem } from "../../../_components/answered.ts";
import { Changes, changesOf } from "./changes.tsx";
import { SigningLeaf } from "./signing-leaf.tsx";
import type { Act } from "./vouching.ts";

type Props = {
  label: string;
  of: string;
  revisionId: string;
  hash: string;
  meaning: string;
  signer: { name: string; email: string };
  /** what has to be put right first */
  hindrances: { path: string; text: string }[];
  open: Act<{ contentSha256: string; wholeAt: Date | null }>;
  readToTheEnd: Act;
  sign: Act;
  page: ReactNode;
  sections: ReactNode;
};

const form = z.object({ password: z.string().min(1, { error: "Write your password." }).max(256) });

export function SignAsAuthor({
  label,
  of,
  revisionId,
  hash,
  meaning,
  signer,
  hindrances,
  open,
  readToTheEnd,
  sign,
  page,
  sections,
}: Props) {
  return (
    <SigningLeaf
      label={label}
      of={of}
      state={<StateMark state="draft">Draft, as it will be signed</StateMark>}
      revisionId={revisionId}
      hash={hash}
      hashTitle="Content to be signed, SHA-256"
      open={open}
      readToTheEnd={readToTheEnd}
      page={page}
      sections={sections}
    >
      {(isWhole) =>
        hindrances.length > 0 ? (
          <StubSection title="To be put right first">
            <ul className="plain">
              {hindrances.map(({ path, text }) => (
                <li key={path}>{text}</li>
              ))}
            </ul>
          </StubSection>
        ) : isWhole ? (
          <SignForm label={label} revisionId={revisionId} hash={hash} meaning={meaning} signer={signer} sign={sign} />
        ) : null
      }
    </SigningLeaf>
  );
}

type FormProps = Pick<Props, "label" | "revisionId" | "hash" | "meaning" | "signer" | "sign">;

function SignForm({ label, revisionId, hash, meaning, signer, sign }: FormProps) {
  const router = useRouter();
  const { register, handleSubmit, formState, ...rest } = useForm<z.infer<typeof form>>({
    resolver: zodResolver(form),
    defaultValues: { password: "" },
  });
  const { errors, isSubmitting, isSubmitSuccessful } = formState;
  const changed = changesOf(errors.root?.changed?.message);
  const submit = handleSubmit(async ({ password }) => {
    const answered = await sign({ revisionId, shownHash: hash, password });
    if (answered.ok) return router.push(`/entries/${label}`);
    const { problem } = answered;
    rest.resetField("password", { defaultValue: "" });
    if (problem.code === "revision.changed")
      rest.setError("root.changed", { message: JSON.stringify(problem.values ?? {}) });
    else if (problem.code === "signing.wrong-password")
      rest.setError("password", { message: `${problem.title}. ${problem.detail ?? ""}` }, { shouldFocus: true });
    else showProblem({ register, handleSubmit, formState, ...rest }, problem, ["password"]);
  });
  return (
    <StubSection title="Your signature">
      <form className="sign" onSubmit={submit} noValidate>
        {changed === null ? null : (
          <Says
            kind="stop"
            finding="The page changed while you were reading it. Nothing was signed."
            urgent
            actions={<Button onClick={() => window.location.reload()}>Read it as it is now</Button>}
          >
            <Changes changes={changed} />
          </Says>
        )}
        {errors.root?.message ? (
          <Says kind="stop" urgent>
            {errors.root.message}
          </Says>
        ) : null}
        <p>
          Meaning of the signature
          <br />
          <b>“{meaning}”</b>
        </p>
        <p>
          Signed by <b>{signer.name}</b>
          <br />
          <span className="faint">{signer.email}</span>
        </p>
        <TextField
          label="Password"
          aside={`of ${signer.name}`}
          type="password"
          autoComplete="current-password"
          error={errors.password?.message}
          {...register("password")}
        />
        <Button
          type="submit"
          kind="first"
          pending={isSubmitting || (isSubmitSuccessful && Object.keys(errors).length === 0)}
          pendingWords="Signing"
        >
          Sign as author
        </Button>
        <p className="note">After that nobody can type in this revision any more.</p>
      </form>
    </StubSection>
  );
}
