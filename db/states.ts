// The states of a revision and which follows which. The trigger in drizzle/ holds the same table.

export const STATES = ["draft", "signed", "witnessed", "returned", "superseded", "voided"] as const;
export type State = (typeof STATES)[number];

const FOLLOWS = {
  draft: ["signed", "voided"],
  signed: ["witnessed", "returned"],
  witnessed: ["superseded"],
  returned: [],
  superseded: [],
  voided: [],
} as const satisfies Record<State, readonly State[]>;

/** The states that may follow, none for a state that is an end. */
export function statesAfter(state: State): readonly State[] {
  return FOLLOWS[state];
}

export function isLegalStep(from: State, to: State): boolean {
  return statesAfter(from).includes(to);
}

export function isState(text: string): text is State {
  return STATES.some((state) => state === text);
}

/** The state that a row of the database names; anything else is a fault of the store. */
export function stateOf(text: string): State {
  if (!isState(text)) throw new Error(`The store holds an unknown state: ${JSON.stringify(text)}`);
  return text;
}
