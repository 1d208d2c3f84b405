"use client";
// What is asked before it is put in: a link's address, a formula, a compound.
import { type FormEvent, useState } from "react";
import { WrittenFormula } from "../components/chem/formula.tsx";
import type { CompoundItem } from "../components/query/compounds.ts";
import { Button } from "../components/ui/button.tsx";
import { Dialog } from "../components/ui/dialog.tsx";
import { TextArea, TextField } from "../components/ui/text-field.tsx";
import { CompoundField } from "./nodes/compound-field.tsx";
import type { FormulaRequest } from "./page-context.tsx";
import { isLinkAllowed, PAGE_LIMITS } from "./schema/index.ts";

export type LinkRequest = { href: string; onDone: (href: string) => void };

export function LinkDialog({ request, onClose }: { request: LinkRequest; onClose: () => void }) {
  const [href, setHref] = useState(request.href);
  const [error, setError] = useState<string>();
  const submit = (event: FormEvent) => {
    event.preventDefault();
    const address = addressOf(href);
    if (address !== "" && !isLinkAllowed(address)) {
      setError("A link begins with https://, http:// or mailto: and has no blanks.");
      return;
    }
    request.onDone(address);
    onClose();
  };
  return (
    <Dialog
      open
      onClose={onClose}
      title={request.href === "" ? "Put in a link" : "Change the link"}
      actions={
        <>
          <Button kind="first" type="submit" form="link-form">
            Put the link in
          </Button>
          {request.href === "" ? null : (
            <Button
              kind="stop"
              onClick={() => {
                request.onDone("");
                onClose();
              }}
            >
              Take the link out
            </Button>
          )}
          <Button kind="quiet" onClick={onClose}>
            Leave it
          </Button>
        </>
      }
    >
      <form id="link-form" onSubmit={submit}>
        <TextField
          label="Address"
          value={href}
          error={error}
          maxLength={PAGE_LIMITS.hrefCharacters}
          inputMode="url"
          onChange={(event) => {
            setHref(event.target.value);
            setError(undefined);
          }}
        />
      </form>
    </Dialog>
  );
}

/** "example.org/a" is meant as https; an e-mail address as mailto. */
function addressOf(typed: string): string {
  const text = typed.trim();
  if (text === "" || /^[a-z][a-z0-9+.-]*:/i.test(text)) return text;
  return /^[^\s@/]+@[^\s@/]+$/.test(text) ? `mailto:${text}` : `https://${text}`;
}

export function FormulaDialog({ request, onClose }: { request: FormulaRequest; onClose: () => void }) {
  const [tex, setTex] = useState(request.tex);
  const [error, setError] = useState<string>();
  const submit = (event: FormEvent) => {
    event.preventDefault();
    if (tex.trim() === "") {
      setError("Write the formula in LaTeX, for example c = n / V.");
      return;
    }
    request.onDone(tex.trim());
    onClose();
  };
  return (
    <Dialog
      open
      onClose={onClose}
      title={request.tex === "" ? "Put in a formula" : "Change the formula"}
      actions={
        <>
          <Button kind="first" type="submit" form="formula-form">
            Put the formula in
          </Button>
          <Button kind="quiet" onClick={onClose}>
            Leave it
          </Button>
        </>
      }
    >
      <form id="formula-form" onSubmit={submit}>
        <TextArea
          label="Formula"
          aside="LaTeX"
          controlClassName="mono"
          value={tex}
          error={error}
          maxLength={2000}
          spellCheck={false}
          onChange={(event) => {
            setTex(event.target.value);
            setError(undefined);
          }}
          onKeyDown={(event) => {
            if (event.key === "Enter" && !event.shiftKey) submit(event);
          }}
        />
        <p className="note">As it will stand on the page:</p>
        <div className="formula" aria-live="polite">
          {tex.trim() === "" ? <span className="faint">nothing yet</span> : <WrittenFormula tex={tex.trim()} display />}
        </div>
      </form>
    </Dialog>
  );
}

export type CompoundRequest = { onDone: (item: CompoundItem) => void };

export function CompoundDialog({ request, onClose }: { request: CompoundRequest; onClose: () => void }) {
  return (
    <Dialog
      open
      onClose={onClose}
      title="Put in a compound"
      actions={
        <Button kind="quiet" onClick={onClose}>
          Leave it
        </Button>
      }
    >
      <CompoundField
        field="asked compound"
        label="Compound"
        chosen={null}
        chosenId=""
        onPick={(item) => {
          request.onDone(item);
          onClose();
        }}
      />
    </Dialog>
  );
}
