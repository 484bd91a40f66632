'use client';
import { useSyncExternalStore } from 'react';

export const PALETTE_NAMES = [
  'paper',
  'tint',
  'ink',
  'ink2',
  'ink3',
  'rule',
  'grid',
  'fwd',
  'fwd2',
  'fwd1',
  'rev',
] as const;
export type PaletteName = (typeof PALETTE_NAMES)[number];
export type Palette = Readonly<Record<PaletteName, string>>;

let present: Palette | null = null;

function readPalette(): Palette {
  const style = getComputedStyle(document.documentElement);
  const read = Object.fromEntries(
    PALETTE_NAMES.map((name) => [name, style.getPropertyValue(`--${name}`).trim() || 'currentColor']),
  );
  return read as Record<PaletteName, string>;
}

const snapshot = (): Palette => (present ??= readPalette());

/** Watches what can change the values: the system's theme, the reader's choice on <html>, and printing. */
function subscribe(listener: () => void): () => void {
  const again = () => {
    present = readPalette();
    listener();
  };
  const media = ['(prefers-color-scheme: dark)', 'print'].map((query) => window.matchMedia(query));
  for (const query of media) query.addEventListener('change', again);
  const observer = new MutationObserver(again);
  observer.observe(document.documentElement, { attributes: true, attributeFilter: ['data-theme'] });
  return () => {
    for (const query of media) query.removeEventListener('change', again);
    observer.disconnect();
  };
}

/** The tokens as a canvas can use them; another object when the theme changes. null on the server. */
export const usePalette = (): Palette | null => useSyncExternalStore<Palette | null>(subscribe, snapshot, () => null);
