// What changed on a page between reading and signing, as the refusal told it.
import { z } from "zod";

const shape = z.object({
  added: z.array(z.string()).default([]),
  gone: z.array(z.string()).default([]),
  values: z.array(z.object({ label: z.string(), was: z.string().nullable(), now: z.string().nullable() })).default([]),
  files: z.array(z.object({ name: z.string(), change: z.string() })).default([]),
  by: z.array(z.string()).default([]),
});
export type PageChanges = z.infer<typeof shape>;

export function changesOf(text: string | undefined): PageChanges | null {
  if (text === undefined) return null;
  const parsed = shape.safeParse(JSON.parse(text));
  return parsed.success ? parsed.data : shape.parse({});
}

export function Changes({ changes }: { changes: PageChanges }) {
  const { added, gone, values, files, by } = changes;
  return (
    <>
      {by.length === 0 ? null : <p>{by.join(", ")} wrote meanwhile.</p>}
      <ul className="plain">
        {added.map((line) => (
          <li key={`+${line}`}>
            New: <ins>{line}</ins>
          </li>
        ))}
        {gone.map((line) => (
          <li key={`-${line}`}>
            Gone: <del>{line}</del>
          </li>
        ))}
        {values.map(({ label, was, now }) => (
          <li key={label}>
            {label}: {was === null ? "blank" : <del>{was}</del>} → {now === null ? "blank" : <ins>{now}</ins>}
          </li>
        ))}
        {files.map(({ name, change }) => (
          <li key={`${name}.${change}`}>
            {name} was {change}
          </li>
        ))}
      </ul>
    </>
  );
}
