// A state is always a drawn mark and a word, never colour alone.
import type { ReactNode } from "react";
import { Mark } from "../ui/mark.tsx";

export const STATE_WORDS = {
  draft: "Draft",
  signed: "Signed",
  witnessed: "Witnessed",
  returned: "Returned",
  superseded: "Superseded",
  voided: "Voided",
  overdue: "Overdue",
  waiting: "Waiting",
  reproduces: "Reproduces",
  differs: "Differs",
  saved: "Saved",
  saving: "Saving",
  offline: "Offline",
} as const;

export type StateName = keyof typeof STATE_WORDS;

type StateMarkProps = {
  state: StateName;
  /** More than the word: "Signed, waits for you", "Saved 09:31 UTC", "Offline, 3 changes kept on this device". */
  children?: ReactNode;
};

export function StateMark({ state, children }: StateMarkProps) {
  return (
    <span className={`state ${state}`}>
      <Mark name={state} />
      <span>{children ?? STATE_WORDS[state]}</span>
    </span>
  );
}
