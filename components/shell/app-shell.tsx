import type { ReactNode } from 'react';
import { Foot, type FootProps } from './foot';
import { Header, type HeaderProps } from './header';
import type { PlantTabKey } from './tabs';

export interface AppShellProps extends Omit<HeaderProps, 'tabs'> {
  tabs?: readonly PlantTabKey[];
  children: ReactNode;
}

/** The tabs whose pages exist. */
export const EXISTING_TABS: readonly PlantTabKey[] = ['plant', 'hours', 'sensors', 'uploads', 'alerts', 'settings'];

/** What stands around every signed-in page: the way past the header, and the header. The page itself is a `Page`. */
export function AppShell({ tabs = EXISTING_TABS, children, ...header }: AppShellProps) {
  return (
    <>
      <a
        href="#content"
        className="sr-only focus:not-sr-only focus:absolute focus:top-2 focus:left-2 focus:z-50 focus:bg-ink focus:px-3 focus:py-2 focus:text-paper"
      >
        Skip to content
      </a>
      <Header tabs={tabs} {...header} />
      {children}
    </>
  );
}

/** The main part of a page and its foot, which only the page can fill: it knows what its numbers rest on. */
export function Page({ foot = {}, children }: { foot?: FootProps; children: ReactNode }) {
  return (
    <>
      <main id="content" tabIndex={-1} className="page outline-none">
        {children}
      </main>
      <Foot {...foot} />
    </>
  );
}
