'use client';
// First: every schema made after it must find zod without code generation.
import './zod-jitless';
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { setNonce } from 'get-nonce';
import type { ReactNode } from 'react';
import { Toaster } from 'sonner';
import type { UnitSystem } from '@/lib/client/format';
import { UnitsProvider } from './units-context';

export interface ProvidersProps {
  /** The content security policy's nonce of this request, for the few styles that dialogs and lists must add. */
  nonce?: string;
  units: UnitSystem;
  children: ReactNode;
}

const makeQueryClient = (): QueryClient =>
  new QueryClient({
    defaultOptions: {
      queries: {
        // What the server just rendered is fresh: no second fetch while the page hydrates.
        staleTime: 30_000,
        refetchOnWindowFocus: false,
      },
    },
  });

const isServer = typeof window === 'undefined';
let browserClient: QueryClient | undefined;
/** One client for the life of the tab; on the server one a request, or answers would cross between people. */
const queryClient = (): QueryClient => (isServer ? makeQueryClient() : (browserClient ??= makeQueryClient()));

let keptNonce: string | undefined;
/** The policy in force is the document's: a later navigation brings another nonce, which would fit no policy. */
function keepNonce(nonce: string | undefined): void {
  if (isServer || keptNonce !== undefined || nonce === undefined) return;
  keptNonce = nonce;
  setNonce(nonce);
}

/** What every page stands in: queries, units, messages. */
export function Providers({ nonce, units, children }: ProvidersProps) {
  keepNonce(nonce);
  return (
    <QueryClientProvider client={queryClient()}>
      <UnitsProvider initial={units}>{children}</UnitsProvider>
      <Toaster
        position="bottom-right"
        toastOptions={{
          unstyled: true,
          classNames: {
            toast: 'w-full max-w-100 rounded border border-ink bg-paper px-3.5 py-2.5 text-base text-ink',
            title: 'font-semibold',
            description: 'text-ink-2',
            actionButton: 'link ml-3.5',
          },
        }}
      />
    </QueryClientProvider>
  );
}
