import type { Metadata, Viewport } from 'next';
import { cookies } from 'next/headers';
import type { ReactNode } from 'react';
import { NoticeProvider } from '@/components/ui/notice';
import { THEME_COOKIE, themeFromCookie } from '@/lib/theme';
import { fontVariables } from './fonts';
import './globals.css';

export const metadata: Metadata = {
  title: { default: 'Beadline', template: '%s - Beadline' },
  description: 'From camera stacks of tracers in superfluid helium to numbers a paper can print.',
  applicationName: 'Beadline',
  manifest: '/manifest.webmanifest',
  icons: {
    icon: [
      { url: '/favicon.svg', type: 'image/svg+xml' },
      { url: '/icon-192.png', type: 'image/png', sizes: '192x192' },
    ],
    apple: '/apple-touch-icon.png',
  },
  formatDetection: { telephone: false, date: false, address: false, email: false },
  robots: { index: false, follow: false },
};

export const viewport: Viewport = {
  width: 'device-width',
  initialScale: 1,
  themeColor: [
    { media: '(prefers-color-scheme: light)', color: '#F2F5F4' },
    { media: '(prefers-color-scheme: dark)', color: '#0B1013' },
  ],
};

/** The theme comes from a cookie, so the first paint is right without a script before it. */
export default async function RootLayout({ children }: { children: ReactNode }) {
  const theme = themeFromCookie((await cookies()).get(THEME_COOKIE)?.value);
  return (
    <html lang="en" data-theme={theme === 'system' ? undefined : theme} className={fontVariables}>
      <body>
        <NoticeProvider>{children}</NoticeProvider>
      </body>
    </html>
  );
}
