'use client';
import { useSyncExternalStore } from 'react';

const QUERY = '(max-width: 760px)';

function subscribe(listener: () => void): () => void {
  const media = window.matchMedia(QUERY);
  media.addEventListener('change', listener);
  return () => media.removeEventListener('change', listener);
}

/** True on a phone's width. False on the server: use it for behaviour, and the `phone:` variant for layout. */
export const usePhone = (): boolean =>
  useSyncExternalStore(
    subscribe,
    () => window.matchMedia(QUERY).matches,
    () => false,
  );
