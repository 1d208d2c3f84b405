"use client";
// What every client component may count on: one query cache, and one voice for polite announcements.
import { QueryClient, QueryClientProvider } from "@tanstack/react-query";
import { type ReactNode, useState } from "react";
import { LiveRegion } from "../../components/ui/live-region.tsx";

export function Providers({ children }: { children: ReactNode }) {
  const [client] = useState(
    () => new QueryClient({ defaultOptions: { queries: { retry: 1, refetchOnWindowFocus: false, networkMode: "always" } } }),
  );
  return (
    <QueryClientProvider client={client}>
      <LiveRegion>{children}</LiveRegion>
    </QueryClientProvider>
  );
}
