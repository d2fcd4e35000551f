/** @type {import('next').NextConfig} */
export default {
  poweredByHeader: false,
  reactStrictMode: true,
  // Sequelize asks for optional drivers by name; bundling it would make each of them mandatory.
  serverExternalPackages: ['sequelize', 'umzug', 'pg-boss', 'sharp', 'jimp', 'pino'],
};
