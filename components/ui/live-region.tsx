"use client";
// What changes without an act of the reader's ("Saved", "Offline", "solved again") is said politely, once each.
import { createContext, type ReactNode, useCallback, useContext, useEffect, useRef, useState } from "react";

const CLEARED_AFTER_MS = 4000;

type Announce = (sentence: string) => void;

const AnnounceContext = createContext<Announce>(() => undefined);

/** Stands once round the application; whatever is inside may announce. */
export function LiveRegion({ children }: { children: ReactNode }) {
  const [said, setSaid] = useState<{ sentence: string; turn: number }>({ sentence: "", turn: 0 });
  const last = useRef("");
  const announce = useCallback<Announce>((sentence) => {
    if (sentence === last.current) return;
    last.current = sentence;
    setSaid((before) => ({ sentence, turn: before.turn + 1 }));
  }, []);

  useEffect(() => {
    if (said.sentence === "") return;
    const timer = setTimeout(() => {
      last.current = "";
      setSaid((before) => (before.turn === said.turn ? { ...before, sentence: "" } : before));
    }, CLEARED_AFTER_MS);
    return () => clearTimeout(timer);
  }, [said]);

  return (
    <AnnounceContext.Provider value={announce}>
      {children}
      <div className="away" role="status" aria-live="polite" aria-atomic="true">
        {said.sentence}
      </div>
    </AnnounceContext.Provider>
  );
}

/** The function that says a sentence. The same sentence again within four seconds is not repeated. */
export function useAnnounce(): Announce {
  return useContext(AnnounceContext);
}
