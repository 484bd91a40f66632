import type { Metadata, Viewport } from 'next';
import { cookies, headers } from 'next/headers';
import type { ReactNode } from 'react';
import { PatternDefs } from '@/components/marks/pattern-defs';
import { readTheme, readUnits, THEME_COOKIE, UNITS_COOKIE } from '@/components/shell/preferences';
import { Providers } from '@/components/shell/providers';
import './globals.css';

export const metadata: Metadata = {
  title: { default: 'Slackwater', template: '%s · Slackwater' },
  description:
    'Which hours ran backwards, how warm the blended supply was and where the design delta-T went, from the trend export a chilled-water plant already has.',
};

export const viewport: Viewport = {
  width: 'device-width',
  initialScale: 1,
  themeColor: [
    { media: '(prefers-color-scheme: light)', color: '#f7f8f5' },
    { media: '(prefers-color-scheme: dark)', color: '#0f1716' },
  ],
};

/** The upright text face: every page sets most of its words in it, so it need not wait for the style sheet. */
const TEXT_FACE = new URL('@fontsource-variable/asap/files/asap-latin-standard-normal.woff2', import.meta.url).pathname;

export default async function RootLayout({ children }: { children: ReactNode }) {
  // Reading the request also makes every page dynamic, which a nonce in the policy needs.
  const [head, kept] = await Promise.all([headers(), cookies()]);
  const theme = readTheme(kept.get(THEME_COOKIE)?.value);
  return (
    <html lang="en" data-theme={theme === 'system' ? undefined : theme}>
      <head>
        <link rel="preload" href={TEXT_FACE} as="font" type="font/woff2" crossOrigin="anonymous" />
      </head>
      <body>
        <PatternDefs />
        <Providers nonce={head.get('x-nonce') ?? undefined} units={readUnits(kept.get(UNITS_COOKIE)?.value) ?? 'ip'}>
          {children}
        </Providers>
      </body>
    </html>
  );
}
