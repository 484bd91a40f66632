import type { Metadata } from 'next';
import type { ReactNode } from 'react';
import { CAUTION } from '@/lib/client/words';

/** The address holds the right to acknowledge: it goes to no other site and into no index. */
export const LINK_METADATA: Metadata = { referrer: 'same-origin', robots: { index: false, follow: false } };

/** The frame of a page that a mail's link opens: one column, as wide as the mail, nothing that needs a sign-in. */
export function LinkFrame({ over, title, children }: { over?: ReactNode; title: string; children: ReactNode }) {
  return (
    <div className="mx-auto max-w-[552px] px-4 pb-8">
      <p className="border-b border-ink py-2.5 font-serif text-[1.25rem] font-semibold">Slackwater</p>
      <main className="pt-5">
        {over === undefined ? null : <p className="mb-1 text-ink-2">{over}</p>}
        <h1 className="mb-4 font-serif text-title font-medium text-pretty">{title}</h1>
        {children}
      </main>
      <footer className="mt-12 border-t border-ink pt-2.5 text-small text-ink-2">{CAUTION}</footer>
    </div>
  );
}
