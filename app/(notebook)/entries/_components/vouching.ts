// What the two signing leaves are given: plain values and actions, nothing of the server's.
import type { Answered } from "../../../_components/answered.ts";

export type Act<T = unknown> = (raw: unknown) => Promise<Answered<T>>;

export type Headline = { pH: number; ionicStrength: number } | null;
export type ShownFinding = {
  id: string;
  engine: string;
  at: Date;
  blocks: {
    id: string;
    name: string;
    verdict: "reproduces" | "differs";
    pinned: { engine: string; result: Headline };
    today: { engine: string; result: Headline };
    keyFits: boolean;
    constants: { same: boolean; changed: { pinned: string; pinnedPKa: string; now: string; nowPKa: string }[] };
  }[];
  files: { id: string; name: string; sha256: string; found: string | null; fits: boolean }[];
  differing: { blocks: string[]; files: string[] };
};
