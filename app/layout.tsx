import type { Metadata, Viewport } from 'next';
import { connection } from 'next/server';
import type { ReactNode } from 'react';
import { fontVariables } from './fonts';
import './globals.css';

export const metadata: Metadata = {
  title: { default: 'Swaypoint', template: '%s, Swaypoint' },
  description:
    'Plans, schedules and judges dose-escalation series that look for the onset of oscillation.',
};

export const viewport: Viewport = {
  width: 'device-width',
  initialScale: 1,
  themeColor: [
    { media: '(prefers-color-scheme: light)', color: '#dfe5e1' },
    { media: '(prefers-color-scheme: dark)', color: '#0a0f0e' },
  ],
};

/** Root of every page. Waiting for the connection keeps pages dynamic, as the nonce policy needs. */
export default async function RootLayout({ children }: { children: ReactNode }) {
  await connection();
  return (
    <html lang="en" className={fontVariables}>
      <body>{children}</body>
    </html>
  );
}
