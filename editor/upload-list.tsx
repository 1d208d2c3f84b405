"use client";
import { Button } from "../components/ui/button.tsx";
import { FieldError } from "../components/ui/field-parts.tsx";
import { Progress } from "../components/ui/progress.tsx";
import type { Uploads } from "./uploads.ts";

/** Files that are on their way, or that did not arrive and why. */
export function UploadList({ uploads, cancel, retry, dismiss }: Uploads) {
  if (uploads.length === 0) return null;
  return (
    <section aria-label="Files on their way">
      {uploads.map(({ id, file, done, state, reason }) => (
        <div className="file" key={id}>
          <span className="name">{file.name}</span>
          {state === "going" ? (
            <>
              <Button kind="quiet" onClick={() => cancel(id)}>
                Cancel
              </Button>
              <Progress label={`Sending ${file.name}`} done={done} />
            </>
          ) : (
            <>
              <span className="row-of">
                <Button kind="quiet" onClick={() => retry(id)}>
                  Send again
                </Button>
                <Button kind="quiet" onClick={() => dismiss(id)}>
                  Leave it
                </Button>
              </span>
              <FieldError heard>{reason}</FieldError>
            </>
          )}
        </div>
      ))}
    </section>
  );
}
