"use client";
import { Leaf, LeafTitle } from "../components/leaf/leaf.tsx";
import { Button } from "../components/ui/button.tsx";

export default function ErrorPage({ error, reset }: { error: Error & { digest?: string }; reset: () => void }) {
  return (
    <Leaf className="small">
      <LeafTitle>This page could not be made</LeafTitle>
      <p>
        Something went wrong on the server. What you typed before is kept. Try again; if it stays so, tell whoever runs
        the server.
      </p>
      {error.digest ? <p className="note">Mark of the fault: {error.digest}</p> : null}
      <Button kind="first" onClick={reset}>
        Try again
      </Button>
    </Leaf>
  );
}
