import type { NextConfig } from 'next';

const securityHeaders = [
  { key: 'X-Content-Type-Options', value: 'nosniff' },
  { key: 'Referrer-Policy', value: 'same-origin' },
  { key: 'X-Frame-Options', value: 'DENY' },
  { key: 'Cross-Origin-Opener-Policy', value: 'same-origin' },
  {
    // The bench card takes photos through a file field, so the camera itself needs no permission.
    key: 'Permissions-Policy',
    value: 'camera=(), microphone=(), geolocation=(), payment=(), usb=(), browsing-topics=()',
  },
];

const nextConfig: NextConfig = {
  poweredByHeader: false,
  typedRoutes: false,
  devIndicators: false,
  serverExternalPackages: ['mysql2', '@node-rs/argon2', 'nodemailer', 'pino'],
  allowedDevOrigins: ['127.0.0.1', 'localhost'],
  // `npm test` type-checks the whole repository; a start must not fail over a file that is not served.
  typescript: { ignoreBuildErrors: true },
  experimental: {
    // Readings of up to 50 MB must reach the action that accepts them or says why not. The proxy
    // buffers bodies too, and would cut them at its own default of 10 MB.
    serverActions: { bodySizeLimit: '64mb' },
    proxyClientMaxBodySize: '64mb',
  },
  async headers() {
    return [
      { source: '/:path*', headers: securityHeaders },
      {
        // Pages carry a policy with a nonce (proxy.ts); what it passes over gets this one.
        source: '/_next/:path*',
        headers: [{ key: 'Content-Security-Policy', value: "frame-ancestors 'none'" }],
      },
    ];
  },
};

export default nextConfig;
