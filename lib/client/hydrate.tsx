import { dehydrate, HydrationBoundary, QueryClient, type QueryKey } from '@tanstack/react-query';
import type { ReactNode } from 'react';

/** Hands what the server has read to the page's queries, so that the first paint holds the answer and nothing is asked twice. */
export function Hydrated({ data, children }: { data: readonly (readonly [QueryKey, unknown])[]; children: ReactNode }) {
  const client = new QueryClient();
  for (const [key, value] of data) client.setQueryData(key, value);
  return <HydrationBoundary state={dehydrate(client)}>{children}</HydrationBoundary>;
}
