import path from 'node:path';

/** @type {import('next').NextConfig} */
export default {
  // The embedded database and the mailer load files of their own packages at run time.
  serverExternalPackages: ['@electric-sql/pglite', 'pg', 'nodemailer', 'busboy'],
  images: { unoptimized: true },
  poweredByHeader: false,
  productionBrowserSourceMaps: false,
  reactStrictMode: true,
  outputFileTracingRoot: path.resolve('.'),
  outputFileTracingExcludes: { '*': ['./data/**', './tests/**', './dist/**'] },
  experimental: { serverActions: { bodySizeLimit: '4mb' } },
};
