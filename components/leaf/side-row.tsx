// A side head in the margin and its matter beside it: the one layout for everything that is not running text.
import type { ReactNode } from "react";
import { classOf } from "../ui/field-parts.tsx";

type SideRowProps = {
  label: ReactNode;
  /** Small, under the label. */
  note?: ReactNode;
  children: ReactNode;
  /** Follows a head directly: no rule above. */
  first?: boolean;
  /** May break over sheets in print. */
  long?: boolean;
  /** Of its heading; 2 right under the leaf's title, 4 inside a block whose title is a level 3. */
  level?: 2 | 3 | 4;
  id?: string;
};

export function SideRow({ label, note, children, first, long, level = 2, id }: SideRowProps) {
  const words = (
    <>
      {label}
      {note ? <small>{note}</small> : null}
    </>
  );
  return (
    <section className={classOf("side", first && "first", long && "long")} id={id}>
      {level === 2 ? (
        <h2 className="lab">{words}</h2>
      ) : level === 3 ? (
        <h3 className="lab">{words}</h3>
      ) : (
        <h4 className="lab">{words}</h4>
      )}
      <div>{children}</div>
    </section>
  );
}
