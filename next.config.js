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
  // Pages carry the nonce policy of proxy.ts; these hold for everything.
  async headers() {
    return [
      // What answers outside the routes' own wrapper too: unknown addresses of the API, and the upload service.
      {
        source: '/api/:path*',
        headers: [{ key: 'content-security-policy', value: "default-src 'none'; frame-ancestors 'none'; sandbox" }],
      },
      {
        source: '/:path*',
        headers: [
          { key: 'x-content-type-options', value: 'nosniff' },
          { key: 'referrer-policy', value: 'same-origin' },
          { key: 'x-frame-options', value: 'DENY' },
          { key: 'cross-origin-opener-policy', value: 'same-origin' },
          { key: 'cross-origin-resource-policy', value: 'same-origin' },
          { key: 'permissions-policy', value: 'geolocation=(), microphone=(), camera=(), payment=(), usb=()' },
        ],
      },
    ];
  },
  experimental: { serverActions: { bodySizeLimit: '4mb' } },
};
