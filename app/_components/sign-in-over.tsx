"use client";
// Authority ended, typing did not: the person signs in over the page, and nothing is typed again (ADM-01).
import { useRouter } from "next/navigation";
import { useState } from "react";
import { Button } from "../../components/ui/button.tsx";
import { Dialog } from "../../components/ui/dialog.tsx";
import { Says } from "../../components/ui/says.tsx";
import type { Answered } from "./answered.ts";
import { SignInForm } from "./sign-in-form.tsx";

type Props = { open: boolean; person: string; enter: (raw: unknown) => Promise<Answered<unknown>> };

export function SignInOver({ open, person, enter }: Props) {
  const router = useRouter();
  const [isAway, setAway] = useState(false);
  // The next time a session ends, it is asked again.
  if (!open && isAway) setAway(false);
  return (
    <>
      {open && isAway ? (
        <Says
          kind="warn"
          finding="You are signed out."
          actions={<Button onClick={() => setAway(false)}>Sign in again</Button>}
        >
          What you type is kept on this device until you do.
        </Says>
      ) : null}
      <Dialog open={open && !isAway} onClose={() => setAway(true)} title="Sign in again to go on">
        <p>Your session ended. What {person} typed is kept on this device and is sent after signing in.</p>
        <SignInForm
          enter={enter}
          onEntered={() => {
            // Whoever signs in, the page is made anew for them; the typed text waits under its writer's name.
            window.dispatchEvent(new Event("online"));
            router.refresh();
          }}
        />
      </Dialog>
    </>
  );
}
