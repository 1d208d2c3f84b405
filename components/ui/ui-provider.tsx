"use client";
// Stands once round everything that the browser runs: links inside menus go through the router, words that the basic parts
// bring along are English on every machine, and there is one polite voice.
import { useRouter } from "next/navigation";
import type { ReactNode } from "react";
import { I18nProvider, RouterProvider } from "react-aria-components";
import { LiveRegion } from "./live-region.tsx";

export function UiProvider({ children }: { children: ReactNode }) {
  const router = useRouter();
  return (
    <I18nProvider locale="en-GB">
      <RouterProvider navigate={(href) => router.push(href)}>
        <LiveRegion>{children}</LiveRegion>
      </RouterProvider>
    </I18nProvider>
  );
}
