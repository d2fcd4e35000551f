// Answers that are no pages run nothing and show nothing of other addresses; pages get a policy of their own
// with a nonce (proxy.ts).
const noPagePolicy = [
  "default-src 'none'",
  "img-src 'self' data:",
  "style-src 'self' 'unsafe-inline'",
  "object-src 'none'",
  "base-uri 'none'",
  "form-action 'self'",
  "frame-ancestors 'none'",
].join('; ');

const securityHeaders = [
  { key: 'X-Content-Type-Options', value: 'nosniff' },
  { key: 'Referrer-Policy', value: 'strict-origin-when-cross-origin' },
  { key: 'Cross-Origin-Opener-Policy', value: 'same-origin' },
  { key: 'Cross-Origin-Resource-Policy', value: 'same-origin' },
  { key: 'Permissions-Policy', value: 'camera=(), microphone=(), geolocation=()' },
  // Browsers heed it over HTTPS only.
  { key: 'Strict-Transport-Security', value: 'max-age=31536000; includeSubDomains' },
];

/** @type {import('next').NextConfig} */
const config = {
  headers: async () => [
    { source: '/:path*', headers: securityHeaders },
    {
      source: '/:place(api|_next)/:path*',
      headers: [{ key: 'Content-Security-Policy', value: noPagePolicy }],
    },
  ],
  // Pages answer 403 through `forbidden()`.
  experimental: { authInterrupts: true },
  poweredByHeader: false,
  reactStrictMode: true,
  // Types are checked by `npm run check`, tests included; whoever starts the product need not wait for it.
  typescript: { ignoreBuildErrors: true },
  // Sequelize asks for optional drivers by name; bundling it would make each of them mandatory.
  serverExternalPackages: ['sequelize', 'umzug', 'pg-boss', 'sharp', 'jimp', 'pino'],
};

export default config;
