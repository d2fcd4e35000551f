/** @type {import('next').NextConfig} */
export default {
  poweredByHeader: false,
  reactStrictMode: true,
  // Types are checked by `npm run check`, tests included; whoever starts the product need not wait for it.
  typescript: { ignoreBuildErrors: true },
  // Sequelize asks for optional drivers by name; bundling it would make each of them mandatory.
  serverExternalPackages: ['sequelize', 'umzug', 'pg-boss', 'sharp', 'jimp', 'pino'],
};
