"use client";

import { useState } from "react";
import { fixed } from "../format.ts";

const MOST = 6;

/** More digits of a pH than the two that it deserves, when asked for. They are the solver's, not the measurement's. */
export function PhDigits({ pH, isStatic }: { pH: number; isStatic: boolean }) {
  const [isAsked, setAsked] = useState(false);
  if (isStatic) return <p className="ph-digits">solved value {fixed(pH, MOST)}</p>;
  return (
    <p className="ph-digits">
      <button type="button" className="quiet" aria-expanded={isAsked} onClick={() => setAsked((before) => !before)}>
        {isAsked ? "Fewer digits" : "More digits"}
      </button>
      <span className={isAsked ? "fig" : "fig ph-digits-folded"}>{isAsked ? fixed(pH, MOST) : ""}</span>
    </p>
  );
}
