'use client';
import { useEffect, useRef } from 'react';

/** Keys by their name as the browser gives it (`/`, `?`, `Escape`), or two in a row with a space between (`g p`). */
export type KeyBindings = Readonly<Record<string, () => void>>;

const SWITCH = 'slackwater-keys';
const CHORD_MS = 1200;

/** Whether single-letter keys are on (WCAG 2.1.4: they can be switched off). */
export const keysAreOn = (): boolean => {
  try {
    return window.localStorage.getItem(SWITCH) !== 'off';
  } catch {
    return true;
  }
};

export const setKeysOn = (on: boolean): void => {
  try {
    window.localStorage.setItem(SWITCH, on ? 'on' : 'off');
  } catch {
    // Storage refused (a private window): the keys stay as they are.
  }
};

/** True while typing goes somewhere else: a field, a list, an open menu or dialog. */
export function isTyping(target: EventTarget | null): boolean {
  if (!(target instanceof Element)) return false;
  return (
    target.closest(
      'input, textarea, select, [contenteditable="true"], [role="listbox"], [role="menu"], [role="dialog"]',
    ) !== null
  );
}

/** Page-wide single keys and two-key chords; silent while a field has focus, with Ctrl, Alt or Meta, or when switched off. */
export function useKeys(bindings: KeyBindings): void {
  const latest = useRef(bindings);
  useEffect(() => {
    latest.current = bindings;
  });
  useEffect(() => {
    let first: { key: string; at: number } | null = null;
    const onKey = (event: KeyboardEvent) => {
      if (event.defaultPrevented || event.ctrlKey || event.altKey || event.metaKey) return;
      if (isTyping(event.target) || !keysAreOn()) return;
      const chord = first !== null && event.timeStamp - first.at < CHORD_MS ? `${first.key} ${event.key}` : null;
      const run = (chord === null ? undefined : latest.current[chord]) ?? latest.current[event.key];
      first = { key: event.key, at: event.timeStamp };
      if (run === undefined) return;
      first = null;
      event.preventDefault();
      run();
    };
    window.addEventListener('keydown', onKey);
    return () => window.removeEventListener('keydown', onKey);
  }, []);
}
