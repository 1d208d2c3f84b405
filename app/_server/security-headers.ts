// What every answer carries so that a browser runs nothing but ours, frames nothing and sends nothing elsewhere.
import "server-only";

export type Policy = { nonce: string; https: boolean; development: boolean };

/** The content policy of a page. The nonce is new for each answer; Next puts it on its own scripts. */
export function contentPolicy({ nonce, https, development }: Policy): string {
  // React's development build evaluates strings to rebuild server stacks in the browser; a production build never does.
  const evaluate = development ? " 'unsafe-eval'" : "";
  return [
    "default-src 'self'",
    `script-src 'nonce-${nonce}' 'strict-dynamic'${evaluate}`,
    `style-src 'self' 'nonce-${nonce}'`,
    // KaTeX places its boxes by style attributes. Elements and sheets still need the nonce.
    "style-src-attr 'unsafe-inline'",
    "img-src 'self' data: blob:",
    "font-src 'self'",
    "connect-src 'self'",
    "worker-src 'self'",
    "manifest-src 'self'",
    "object-src 'none'",
    "base-uri 'none'",
    "frame-ancestors 'none'",
    "form-action 'self'",
    ...(https ? ["upgrade-insecure-requests"] : []),
  ].join("; ");
}

/** The rest, the same for pages, answers of routes and files. */
export function commonHeaders(https: boolean): Record<string, string> {
  return {
    "x-content-type-options": "nosniff",
    "referrer-policy": "same-origin",
    "permissions-policy": "camera=(), microphone=(), geolocation=(), payment=(), usb=(), serial=()",
    "cross-origin-opener-policy": "same-origin",
    "cross-origin-resource-policy": "same-origin",
    "x-frame-options": "DENY",
    ...(https ? { "strict-transport-security": "max-age=31536000; includeSubDomains" } : {}),
  };
}

/** What a route's answer may do when a browser opens it as a page: nothing. */
export const ROUTE_POLICY = "default-src 'none'; frame-ancestors 'none'; base-uri 'none'; form-action 'none'";
/** The same for a stored file, in a sandbox of its own besides. */
export const FILE_POLICY = `${ROUTE_POLICY}; sandbox`;
