'use client';
import { Check, Copy } from 'lucide-react';
import { useEffect, useState } from 'react';
import { Button } from '@/components/ui/button';

const SAID_MS = 2500;

/** Copies a text and says so; where the browser refuses, it says that the line can be selected. */
export function CopyButton({ text, children }: { text: string; children: string }) {
  const [state, setState] = useState<'ready' | 'copied' | 'refused'>('ready');
  useEffect(() => {
    if (state !== 'copied') return;
    const timer = setTimeout(() => setState('ready'), SAID_MS);
    return () => clearTimeout(timer);
  }, [state]);
  const copy = async () => {
    try {
      await navigator.clipboard.writeText(text);
      setState('copied');
    } catch {
      // No permission, or a page that is not served over https.
      setState('refused');
    }
  };
  const Icon = state === 'copied' ? Check : Copy;
  return (
    <>
      <Button onClick={() => void copy()}>
        <Icon size={16} strokeWidth={1.5} aria-hidden="true" />
        {children}
      </Button>
      <span role="status" className={state === 'ready' ? 'sr-only' : 'text-ink-2'}>
        {state === 'copied' ? 'Copied.' : state === 'refused' ? 'The browser does not allow it: select the line.' : ''}
      </span>
    </>
  );
}
