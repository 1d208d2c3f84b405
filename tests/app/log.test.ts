import { expect, it } from "vitest";
import { createLog } from "../../app/_server/log.ts";

function written(say: (log: ReturnType<typeof createLog>) => void): string {
  const lines: string[] = [];
  say(createLog("debug", { write: (line: string) => lines.push(line) }));
  return lines.join("");
}

it("leaves out passwords, tokens and cookies wherever they stand (ADM-13)", () => {
  const text = written((log) =>
    log.info({ password: "S3CRET-a", input: { token: "S3CRET-b", deep: { cookie: "S3CRET-c" } } }, "said"),
  );
  expect(text).not.toContain("S3CRET");
  expect(text).toContain("said");
});

it("keeps a driver's statement and its values out of a fault", () => {
  const text = written((log) =>
    log.error({ error: new Error("Failed query: select * from t where x = $1\nparams: what somebody typed") }, "fault"),
  );
  expect(text).not.toContain("somebody typed");
  expect(text).toContain("a statement failed");
});
