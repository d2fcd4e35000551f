/**
 * Content-Security-Policy of a page. Scripts run only when they carry the page's nonce, or were loaded by
 * one that does; styles are set inline by canvas and charts.
 * @param nonce new for each answer
 * @param development Next's tools evaluate code while a programmer works
 */
export function pagePolicy(nonce: string, development = false): string {
  return [
    "default-src 'self'",
    `script-src 'self' 'nonce-${nonce}' 'strict-dynamic'${development ? " 'unsafe-eval'" : ''}`,
    "style-src 'self' 'unsafe-inline'",
    "img-src 'self' blob: data:",
    "font-src 'self'",
    `connect-src 'self'${development ? ' ws:' : ''}`,
    "worker-src 'self' blob:",
    "object-src 'none'",
    "base-uri 'none'",
    "form-action 'self'",
    "frame-ancestors 'none'",
  ].join('; ');
}
