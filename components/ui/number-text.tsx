"use client";
// A typed number. It is kept as typed: the field never rewrites its digits. It is read on Enter or on leaving, the
// reading is echoed where it could surprise, and a text that could mean two numbers is asked about (CAL-01, CAL-02).
import { type KeyboardEvent, type ReactNode, type Ref, useEffect, useId, useState } from "react";
import { type DecimalSign, readTyped, showDecimal } from "../format.ts";
import { Button } from "./button.tsx";
import { describedBy, FieldFrame, fieldIds } from "./field-parts.tsx";

export type NumberTextProps = {
  label: ReactNode;
  aside?: ReactNode;
  hint?: ReactNode;
  /** An error found elsewhere, by the server for instance. What was typed stays. */
  error?: ReactNode;
  /** The committed decimal, "." as its sign ("0.100"), or "" for none. */
  value: string;
  /** Called with the new decimal, or with "" when the field was emptied; never for a text that could not be read. */
  onCommit: (decimal: string) => void;
  /** Called with the text that stands here and is not committed, and with null when nothing does. */
  onText?: (text: string | null) => void;
  /** A text that was typed here before and not committed: it stands in the field at first, and only Enter takes it. */
  offered?: string | null;
  /** Said below the field as long as that text stands there. */
  offeredHint?: ReactNode;
  decimalSign?: DecimalSign;
  /** A sentence when a readable number is not possible here: "An amount is above zero." */
  refuse?: (decimal: string) => string | undefined;
  /** A unit or a name, said after the echo. */
  unit?: string;
  required?: boolean;
  disabled?: boolean;
  name?: string;
  id?: string;
  className?: string;
  onBlur?: () => void;
  ref?: Ref<HTMLInputElement>;
};

type Doubt = { error: string } | { readings: string[] };

export function NumberText({
  label,
  aside,
  hint,
  error,
  value,
  onCommit,
  onText,
  offered = null,
  offeredHint,
  decimalSign = ".",
  refuse,
  unit,
  required,
  disabled,
  name,
  id,
  className,
  onBlur,
  ref,
}: NumberTextProps) {
  const own = useId();
  const ids = fieldIds(id ?? own);
  const [isOffered, setOffered] = useState(offered !== null && offered !== typedText(value, decimalSign));
  const [text, setText] = useState(() => (isOffered && offered !== null ? offered : typedText(value, decimalSign)));
  const [isPending, setPending] = useState(isOffered);
  const [committed, setCommitted] = useState(value);
  const [seen, setSeen] = useState(value);
  const [doubt, setDoubt] = useState<Doubt>();
  const [echo, setEcho] = useState<string>();

  if (value !== seen) {
    setSeen(value);
    if (value !== committed) {
      // Somebody else, or an undo, changed the value: it is shown, but not in place of what is being typed here.
      setCommitted(value);
      setEcho(undefined);
      if (!isPending || text === typedText(value, decimalSign)) {
        setText(typedText(value, decimalSign));
        setPending(false);
        setDoubt(undefined);
      }
    }
  }
  useEffect(() => onText?.(isPending ? text : null), [onText, isPending, text]);

  const take = (decimal: string, surprising: boolean) => {
    const reason = decimal === "" ? (required ? "Write a number." : undefined) : refuse?.(decimal);
    if (reason) {
      setDoubt({ error: reason });
      setEcho(undefined);
      return;
    }
    setDoubt(undefined);
    setEcho(surprising ? decimal : undefined);
    setPending(false);
    if (decimal === committed) return;
    setCommitted(decimal);
    onCommit(decimal);
  };

  const read = () => {
    setOffered(false);
    if (text.trim() === "") return take("", false);
    const typed = readTyped(text, decimalSign);
    if (typed.ok) return take(typed.decimal, typed.foreign || differsInLook(text, typed.decimal, decimalSign));
    setEcho(undefined);
    setDoubt(typed.ambiguous ? { readings: typed.readings } : { error: typed.error });
  };

  const choose = (decimal: string) => {
    setText(typedText(decimal, decimalSign));
    take(decimal, false);
  };

  const onKeyDown = (event: KeyboardEvent<HTMLInputElement>) => {
    if (event.key === "Enter") {
      event.preventDefault();
      read();
    }
    if (event.key === "Escape" && text !== typedText(committed, decimalSign)) {
      event.stopPropagation();
      setText(typedText(committed, decimalSign));
      setDoubt(undefined);
      setOffered(false);
      setPending(false);
    }
  };

  const wrong = doubt && "error" in doubt ? doubt.error : error;
  const readings = doubt && "readings" in doubt ? doubt.readings : undefined;
  const more = `${own}-said`;
  return (
    <FieldFrame
      ids={ids}
      label={label}
      aside={aside}
      hint={isOffered ? offeredHint : hint}
      error={wrong}
      className={className}
      heard={doubt !== undefined}
      after={
        <>
          {echo === undefined ? null : (
            <p className="echo" id={more} role="status">
              Read as <span className="figs">{showDecimal(echo, decimalSign)}</span>
              {unit ? ` ${unit}` : ""}
            </p>
          )}
          {readings ? (
            <div className="ask" id={more} role="alert">
              <p>{readings.length > 1 ? "This can be read in two ways. Which number is it?" : "Is this the number?"}</p>
              <p className="acts">
                {readings.map((reading) => (
                  <Button key={reading} onClick={() => choose(reading)}>
                    {showDecimal(reading, decimalSign)}
                    {unit ? ` ${unit}` : ""}
                  </Button>
                ))}
              </p>
            </div>
          ) : null}
        </>
      }
    >
      <input
        ref={ref}
        id={ids.control}
        name={name}
        className="in num"
        type="text"
        inputMode="decimal"
        autoComplete="off"
        spellCheck={false}
        value={text}
        disabled={disabled}
        aria-required={required || undefined}
        aria-invalid={wrong || readings ? true : undefined}
        aria-describedby={describedBy(
          ids,
          { hint: Boolean(isOffered ? offeredHint : hint), error: Boolean(wrong) },
          echo !== undefined || readings ? more : undefined,
        )}
        onChange={(event) => {
          setText(event.target.value);
          setDoubt(undefined);
          setEcho(undefined);
          setOffered(false);
          setPending(event.target.value !== typedText(committed, decimalSign));
        }}
        onKeyDown={onKeyDown}
        onBlur={() => {
          // What was only offered is not taken by passing through.
          if (!isOffered) read();
          onBlur?.();
        }}
      />
    </FieldFrame>
  );
}

/** A stored decimal as a person would have typed it: own decimal sign, "e" for the power. */
function typedText(decimal: string, decimalSign: DecimalSign): string {
  return decimal.replace(".", decimalSign);
}

/** Whether the reading looks other than the text, so that it is worth saying. */
function differsInLook(text: string, decimal: string, decimalSign: DecimalSign): boolean {
  return text.trim().replace("\u2212", "-") !== typedText(decimal, decimalSign);
}
