"use client";
// The last resort: the frame itself failed, so nothing of it is used here.
export default function GlobalError({ reset }: { error: Error; reset: () => void }) {
  return (
    <html lang="en">
      <body>
        <main>
          <h1>Counterleaf could not be shown</h1>
          <p>Something went wrong. What you typed before is kept.</p>
          <button type="button" onClick={reset}>
            Try again
          </button>
        </main>
      </body>
    </html>
  );
}
