// The drawn marks, 16 units square, one ink. A mark never stands alone: a word goes with it.
import type { ReactElement } from "react";

const drawings = {
  draft: <circle cx="8" cy="8" r="6" strokeDasharray="2.1 2.61" />,
  signed: (
    <>
      <circle cx="8" cy="8" r="6" />
      <path className="s" d="M8 2a6 6 0 0 1 0 12z" />
    </>
  ),
  witnessed: (
    <>
      <circle cx="8" cy="8" r="6.4" />
      <circle className="s" cx="8" cy="8" r="3.6" />
    </>
  ),
  returned: <path d="M13.5 13V8.5A3.5 3.5 0 0 0 10 5H3M6.5 1.5 3 5l3.5 3.5" />,
  superseded: <path d="M5.5 4.5h8v9h-8zM3 11V2h8" />,
  voided: (
    <>
      <circle cx="8" cy="8" r="6" />
      <path d="m12.5 3.5-9 9" />
    </>
  ),
  overdue: <path d="M3 2.5h10M3 13.5h10M4.5 2.5c0 3.5 7 7.5 7 11M11.5 2.5c0 3.5-7 7.5-7 11" />,
  waiting: (
    <>
      <circle cx="8" cy="8" r="6" />
      <path d="M8 4.5V8l2.6 2" />
    </>
  ),
  reproduces: <path d="M2.5 5.7h11M2.5 10.3h11" strokeWidth="2" />,
  differs: <path d="M2.5 5.7h11M2.5 10.3h11M11 2 5 14" strokeWidth="1.9" />,
  saved: (
    <>
      <path d="M2 13.5h12" />
      <circle className="s" cx="8" cy="7.5" r="3" />
    </>
  ),
  saving: (
    <>
      <path d="M2 13.5h12" />
      <circle cx="8" cy="6" r="3" strokeDasharray="2 1.6" />
    </>
  ),
  offline: (
    <>
      <path d="M2 13.5h3.5m5 0H14" />
      <circle className="s" cx="8" cy="5.5" r="3" />
      <path d="m5.5 15 5-3" />
    </>
  ),
  here: <circle className="s" cx="8" cy="8" r="4" />,
  away: <circle cx="8" cy="8" r="3.6" />,
  good: <path d="M2.5 8.5 6.3 12.3 13.5 4" strokeWidth="2" />,
  warn: (
    <>
      <path d="M8 2.2v7.3" strokeWidth="2.2" />
      <circle className="s" cx="8" cy="13" r="1.5" />
    </>
  ),
  stop: (
    <>
      <path d="M5.3 1.8h5.4l3.5 3.5v5.4l-3.5 3.5H5.3l-3.5-3.5V5.3z" />
      <path d="M8 4.6v4.2" strokeWidth="1.8" />
      <circle className="s" cx="8" cy="11.2" r="1" />
    </>
  ),
  info: (
    <>
      <path d="M8 6.6v6.9" strokeWidth="2" />
      <circle className="s" cx="8" cy="3.2" r="1.4" />
    </>
  ),
} satisfies Record<string, ReactElement>;

export type MarkName = keyof typeof drawings;

export function Mark({ name, className }: { name: MarkName; className?: string }) {
  return (
    <svg className={className ? `mark ${className}` : "mark"} viewBox="0 0 16 16" aria-hidden="true" focusable="false">
      {drawings[name]}
    </svg>
  );
}
