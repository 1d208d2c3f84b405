"use client";

import type { Sweeps } from "../../chem/index.ts";
import { sweepCsv } from "./sweep-csv.ts";

/** Hands out both sweeps as CSV files, made in the browser from what is on the page. */
export function SweepDownload({ sweeps, name }: { sweeps: Sweeps; name: string }) {
  return (
    <p className="plot-download no-print">
      <button type="button" className="quiet" onClick={() => save(sweepCsv(sweeps.coarse), `${name}-coarse-sweep.csv`)}>
        Coarse sweep as CSV
      </button>
      <button
        type="button"
        className="quiet"
        onClick={() => save(sweepCsv(sweeps.refined), `${name}-refined-sweep.csv`)}
      >
        Refined sweep as CSV
      </button>
    </p>
  );
}

function save(csv: string, fileName: string): void {
  const address = URL.createObjectURL(new Blob([csv], { type: "text/csv;charset=utf-8;header=present" }));
  const link = document.createElement("a");
  link.href = address;
  link.download = fileName;
  link.click();
  // The browser has taken the content over once the click is handled.
  setTimeout(() => URL.revokeObjectURL(address), 0);
}
