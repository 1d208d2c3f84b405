import type { Metadata, Viewport } from "next";
import { headers } from "next/headers";
import type { ReactNode } from "react";
import { SkipToLeaf } from "../components/leaf/leaf.tsx";
import { Providers } from "./_components/providers.tsx";
import "./globals.css";
import "./pages.css";

export const metadata: Metadata = {
  title: { default: "Counterleaf", template: "%s · Counterleaf" },
  description: "A shared laboratory notebook with embedded equilibrium calculation blocks.",
};

export const viewport: Viewport = { width: "device-width", initialScale: 1, colorScheme: "light dark" };

/** Every page is made for one request: its nonce differs each time, and most of them read the database. */
export default async function RootLayout({ children }: { children: ReactNode }) {
  const nonce = (await headers()).get("x-nonce") ?? undefined;
  return (
    <html lang="en">
      <head>
        {/* react-aria-components read it for the two style elements that they put in. */}
        <meta name="csp-nonce" nonce={nonce} />
      </head>
      <body>
        <SkipToLeaf />
        <Providers>{children}</Providers>
      </body>
    </html>
  );
}
