// The name, parted by a perforation of its own.
import Link from "next/link";

export function Wordmark({ href = "/desk", large }: { href?: string; large?: boolean }) {
  return (
    <Link className={large ? "word large" : "word"} href={href} aria-label="Counterleaf, to the desk">
      <Letters />
    </Link>
  );
}

/** Where there is nowhere to go yet, on the sign-in leaf. */
export function WordmarkOnly({ large }: { large?: boolean }) {
  return (
    <span className={large ? "word large" : "word"} role="img" aria-label="Counterleaf">
      <Letters />
    </span>
  );
}

function Letters() {
  return (
    <>
      Counter
      <i aria-hidden="true" />
      leaf
    </>
  );
}
