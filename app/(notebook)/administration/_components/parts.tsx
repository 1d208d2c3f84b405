"use client";
// The parts of Administration, at the top of each of its leaves.
import Link from "next/link";
import { usePathname } from "next/navigation";

const PARTS = [
  ["/administration/people", "People and roles"],
  ["/administration/notebooks", "Notebooks and members"],
  ["/administration/audit", "Audit trail"],
] as const;
const DEMO_PARTS = [["/administration/outbox", "Mail sent"]] as const;

export function Parts({ isDemo }: { isDemo: boolean }) {
  const path = usePathname();
  return (
    <nav className="parts" aria-label="Parts of Administration">
      {[...PARTS, ...(isDemo ? DEMO_PARTS : [])].map(([href, words]) => (
        <Link key={href} href={href} aria-current={path === href ? "page" : undefined}>
          {words}
        </Link>
      ))}
    </nav>
  );
}
