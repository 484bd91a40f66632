'use client';
import { useQueryClient } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import { useCallback } from 'react';

/** What a button says while its request is under way. */
export const WAIT_WORDS = { signIn: 'Signing in', signUp: 'Starting' } as const;

/** Goes into the product as whoever has just signed in; nothing that another person's session left stays in this tab. */
export function useEnter(): (path: string) => void {
  const router = useRouter();
  const queries = useQueryClient();
  return useCallback(
    (path: string) => {
      queries.clear();
      router.replace(path);
      router.refresh();
    },
    [queries, router],
  );
}
