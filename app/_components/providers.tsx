"use client";
// What every client component may count on: one query cache, the words and links of the basic parts, and one polite voice.
import { QueryClient, QueryClientProvider } from "@tanstack/react-query";
import { type ReactNode, useState } from "react";
import { UiProvider } from "../../components/ui/ui-provider.tsx";

export function Providers({ children }: { children: ReactNode }) {
  const [client] = useState(
    () =>
      new QueryClient({
        defaultOptions: { queries: { retry: 1, refetchOnWindowFocus: false, networkMode: "always" } },
      }),
  );
  return (
    <QueryClientProvider client={client}>
      <UiProvider>{children}</UiProvider>
    </QueryClientProvider>
  );
}
