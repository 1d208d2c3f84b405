"use client";
// The witness's decision: what the server found when it solved and hashed again, words for a difference, then the
// countersignature with its fixed meaning, or the way back to the author with a reason.
import { zodResolver } from "@hookform/resolvers/zod";
import { useRouter } from "next/navigation";
import { type ReactNode, useState } from "react";
import { useForm } from "react-hook-form";
import { z } from "zod";
import { fixed, formatDateTime } from "../../../../components/format.ts";
import { StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Fingerprint } from "../../../../components/leaf/fingerprint.tsx";
import { StateMark } from "../../../../components/leaf/state-mark.tsx";
import { Button } from "../../../../components/ui/button.tsx";
import { Dialog } from "../../../../components/ui/dialog.tsx";
import { FieldError } from "../../../../components/ui/field-parts.tsx";
import { Progress } from "../../../../components/ui/progress.tsx";
import { Says } from "../../../../components/ui/says.tsx";
import { TextArea, TextField } from "../../../../components/ui/text-field.tsx";
import { sentenceOf, showProblem } from "../../../_components/answered.ts";
import { SigningLeaf } from "./signing-leaf.tsx";
import type { Act, Headline, ShownFinding } from "./vouching.ts";

type Props = {
  label: string;
  of: string;
  revisionId: string;
  hash: string;
  author: string;
  meaning: string;
  signer: { name: string; email: string };
  counts: { blocks: number; files: number };
  decimalSign: "." | ",";
  open: Act<{ contentSha256: string; wholeAt: Date | null }>;
  readToTheEnd: Act;
  check: Act<ShownFinding>;
  countersign: Act;
  giveBack: Act;
  page: ReactNode;
  sections: ReactNode;
};

export function Countersign(props: Props) {
  const { label, of, revisionId, hash, open, readToTheEnd, page, sections } = props;
  const [finding, setFinding] = useState<ShownFinding | null>(null);
  return (
    <SigningLeaf
      label={label}
      of={of}
      state={<StateMark state="signed">Signed, waits for you</StateMark>}
      revisionId={revisionId}
      hash={hash}
      hashTitle="Signed content, SHA-256"
      open={open}
      readToTheEnd={readToTheEnd}
      page={page}
      sections={sections}
    >
      {(isWhole) => (
        <>
          {isWhole ? <Check {...props} finding={finding} onFinding={setFinding} /> : null}
          {isWhole && finding !== null ? <CountersignForm {...props} finding={finding} /> : null}
          <StubSection>
            <ReturnToAuthor label={label} revisionId={revisionId} author={props.author} giveBack={props.giveBack} />
          </StubSection>
        </>
      )}
    </SigningLeaf>
  );
}

type CheckProps = Props & { finding: ShownFinding | null; onFinding: (finding: ShownFinding) => void };

function Check({ revisionId, check, counts, decimalSign, finding, onFinding }: CheckProps) {
  const [pending, setPending] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  const run = async () => {
    setPending(true);
    setFault(null);
    const answered = await check({ revisionId });
    setPending(false);
    if (answered.ok) onFinding(answered.value);
    else setFault(sentenceOf(answered.problem));
  };
  const what = `${counted(counts.blocks, "calculation")} and ${counted(counts.files, "file")}`;
  return (
    <StubSection title="Checked by the server">
      {finding === null ? (
        <>
          <p className="note">
            The server solves every calculation again from what was signed, and hashes every file again.
          </p>
          {pending ? <Progress label={`Checking ${what}`} /> : null}
          <Button pending={pending} onClick={run}>
            Check {what}
          </Button>
        </>
      ) : (
        <Found finding={finding} decimalSign={decimalSign} />
      )}
      {fault === null ? null : <FieldError heard>{fault}</FieldError>}
    </StubSection>
  );
}

function Found({ finding, decimalSign }: { finding: ShownFinding; decimalSign: "." | "," }) {
  const pH = (headline: Headline) => (headline === null ? "not solved" : fixed(headline.pH, 9, decimalSign));
  return (
    <>
      {finding.blocks.map((block) => (
        <div key={block.id} className="finding-of">
          <p>
            <b>{block.name}</b>
            <br />
            <StateMark state={block.verdict} />
          </p>
          <table>
            <thead>
              <tr>
                <td />
                <th scope="col" className="r">
                  pH
                </th>
              </tr>
            </thead>
            <tbody>
              <tr>
                <th scope="row">as signed, engine {block.pinned.engine}</th>
                <td className="r mono">{pH(block.pinned.result)}</td>
              </tr>
              <tr>
                <th scope="row">re-solved by the server, engine {block.today.engine}</th>
                <td className="r mono">{pH(block.today.result)}</td>
              </tr>
            </tbody>
          </table>
          {block.keyFits ? null : (
            <FieldError>The kept key does not belong to the kept inputs. Tell an administrator.</FieldError>
          )}
          {block.constants.same ? (
            <p className="note">Today’s constants are those that were used.</p>
          ) : (
            <p className="note">
              Today’s constants differ:{" "}
              {block.constants.changed
                .map(({ pinned, pinnedPKa, now, nowPKa }) => `${pinned} ${pinnedPKa}, now ${now} ${nowPKa}`)
                .join("; ")}
              .
            </p>
          )}
        </div>
      ))}
      {finding.files.map((file) => (
        <div key={file.id} className="finding-of">
          <p>
            <b>{file.name}</b>
            <br />
            {file.fits ? (
              <StateMark state="reproduces">Fits its SHA-256</StateMark>
            ) : (
              <StateMark state="differs">Does not fit its SHA-256</StateMark>
            )}
          </p>
          <Fingerprint hex={file.found ?? file.sha256} label={`SHA-256 of ${file.name} now`} short />
        </div>
      ))}
      {finding.blocks.length + finding.files.length === 0 ? (
        <p className="note">There is no calculation and no file on the page.</p>
      ) : null}
      <p className="note">
        Checked {formatDateTime(finding.at)}. “Reproduces” says that engine {finding.engine} gave the same value, no
        more.
      </p>
    </>
  );
}

function CountersignForm({
  label,
  revisionId,
  hash,
  meaning,
  signer,
  countersign,
  finding,
}: Props & { finding: ShownFinding }) {
  const router = useRouter();
  const differs = finding.differing.blocks.length > 0;
  const shape = z.object({
    acknowledgement: differs
      ? z.string().trim().min(3, { error: "Write what you make of the difference." }).max(1000)
      : z.string().max(1000),
    password: z.string().min(1, { error: "Write your password." }).max(256),
  });
  const form = useForm<z.infer<typeof shape>>({
    resolver: zodResolver(shape),
    defaultValues: { acknowledgement: "", password: "" },
  });
  const { errors, isSubmitting, isSubmitSuccessful } = form.formState;
  const submit = form.handleSubmit(async ({ acknowledgement, password }) => {
    const answered = await countersign({
      revisionId,
      shownHash: hash,
      findingId: finding.id,
      acknowledgement,
      password,
    });
    if (answered.ok) return router.push(`/entries/${label}`);
    const { problem } = answered;
    form.resetField("password", { defaultValue: "" });
    if (problem.code === "signing.wrong-password")
      form.setError("password", { message: `${problem.title}. ${problem.detail ?? ""}` }, { shouldFocus: true });
    else showProblem(form, problem, ["acknowledgement", "password"]);
  });
  if (finding.differing.files.length > 0) {
    return (
      <StubSection title="Your decision">
        <Says kind="stop" finding="A file is not what was signed, so this revision cannot be countersigned.">
          Tell an administrator: {finding.differing.files.join(", ")}.
        </Says>
      </StubSection>
    );
  }
  return (
    <StubSection title="Your decision">
      <form className="sign" onSubmit={submit} noValidate>
        {errors.root ? (
          <Says kind="stop" urgent>
            {errors.root.message}
          </Says>
        ) : null}
        {differs ? (
          <TextArea
            label="What you make of the difference"
            hint={`Kept with your signature: ${finding.differing.blocks.join(", ")}.`}
            error={errors.acknowledgement?.message}
            {...form.register("acknowledgement")}
          />
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
          {...form.register("password")}
        />
        <Button
          type="submit"
          kind="first"
          pending={isSubmitting || (isSubmitSuccessful && Object.keys(errors).length === 0)}
          pendingWords="Countersigning"
        >
          Countersign
        </Button>
      </form>
    </StubSection>
  );
}

const reasoned = z.object({
  reason: z
    .string()
    .trim()
    .min(3, { error: "Write why, so that the author knows what to do." })
    .max(1000, { error: "At most 1000 characters." }),
});

type ReturnProps = { label: string; revisionId: string; author: string; giveBack: Act };

function ReturnToAuthor({ label, revisionId, author, giveBack }: ReturnProps) {
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const form = useForm<z.infer<typeof reasoned>>({ resolver: zodResolver(reasoned), defaultValues: { reason: "" } });
  const { errors, isSubmitting } = form.formState;
  const submit = form.handleSubmit(async ({ reason }) => {
    const answered = await giveBack({ revisionId, reason });
    if (answered.ok) return router.push(`/entries/${label}`);
    showProblem(form, answered.problem, ["reason"]);
  });
  return (
    <>
      <Button kind="stop" onClick={() => setOpen(true)}>
        Return to author
      </Button>
      <p className="note">Returning asks for a reason; {author} then gets the next revision.</p>
      <Dialog
        open={open}
        onClose={() => setOpen(false)}
        title={`Return ${label} to ${author}?`}
        busy={isSubmitting}
        actions={
          <>
            <Button kind="stop" pending={isSubmitting} pendingWords="Returning it" onClick={submit}>
              Return to author
            </Button>
            <Button kind="quiet" onClick={() => setOpen(false)}>
              Leave it
            </Button>
          </>
        }
      >
        <p>
          This revision and its signature stay readable. A new revision begins as a draft with the same content and no
          signature.
        </p>
        {errors.root ? (
          <Says kind="stop" urgent>
            {errors.root.message}
          </Says>
        ) : null}
        <TextArea
          label="Reason"
          hint="You may name a place, such as ¶ 4 or E2."
          rows={3}
          error={errors.reason?.message}
          {...form.register("reason")}
        />
      </Dialog>
    </>
  );
}

function counted(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? "" : "s"}`;
}
