import { stringify } from "csv-stringify/browser/esm/sync";
import type { Sweep } from "../../chem/index.ts";

/**
 * Writes a sweep as CSV (RFC 4180: comma, CRLF, a header line), every column with its unit, every number with all of its
 * digits and a decimal point. The logarithm is left empty where the residual is exactly zero.
 */
export function sweepCsv(sweep: Sweep): string {
  const forms = sweep.fractions.flatMap((family) =>
    family.values.map((values, lost) => ({
      head: `alpha (${family.name}: ${family.forms[lost] ?? lost}) / 1`,
      values,
    })),
  );
  const head = [
    "pH / 1",
    "[H+] / (mol/L)",
    "[OH-] / (mol/L)",
    ...forms.map((form) => form.head),
    "left side of the proton condition / (mol/L)",
    "right side of the proton condition / (mol/L)",
    "|P| / (mol/L)",
    "log10(|P| / (mol/L)) / 1",
    "buffer capacity / (mol/L)",
  ];
  const lines = sweep.pH.map((pH, index) => {
    const logP = sweep.logResidual[index] ?? Number.NEGATIVE_INFINITY;
    return [
      pH,
      sweep.H[index],
      sweep.OH[index],
      ...forms.map((form) => form.values[index]),
      sweep.left[index],
      sweep.right[index],
      Number.isFinite(logP) ? 10 ** logP : 0,
      Number.isFinite(logP) ? logP : "",
      sweep.beta[index],
    ];
  });
  return stringify([head, ...lines], { record_delimiter: "\r\n" });
}
