// A SHA-256 to be read and compared: groups of four, the whole of it where it is relied on.
import { groupsOfFour } from "../format.ts";

type FingerprintProps = {
  hex: string;
  /** Said before it to those who hear the page, such as "SHA-256 of the signed content". */
  label?: string;
  /** The first 32 digits and an ellipsis; only where nobody decides by it. */
  short?: boolean;
  className?: string;
};

const SHORT_DIGITS = 32;

export function Fingerprint({ hex, label = "SHA-256", short = false, className }: FingerprintProps) {
  const shown = short ? hex.slice(0, SHORT_DIGITS) : hex;
  return (
    <p className={className ? `print-of ${className}` : "print-of"}>
      <span className="away">{label}: </span>
      {/* A space between the groups, so that a copy of it can be searched for; the comparison ignores spaces. */}
      {groupsOfFour(shown).join(" ")}
      {short && hex.length > SHORT_DIGITS ? " …" : ""}
    </p>
  );
}
