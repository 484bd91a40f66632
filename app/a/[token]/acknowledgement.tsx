'use client';
import { useCallback, useEffect, useRef, useState, type SubmitEvent } from 'react';
import { Button } from '@/components/ui/button';
import { ErrorState } from '@/components/ui/states';
import type { AcknowledgedState } from '../link';

export interface AcknowledgementProps {
  /** The link's own path; its POSTs lie under it. */
  path: string;
  state: AcknowledgedState;
  /** Acknowledge as soon as the page stands, unless it was just taken back. */
  atOnce: boolean;
}

/** The one thing to do here, and how it stands. Forms, so that it works without script; with script nothing reloads. */
export function Acknowledgement({ path, state: initial, atOnce }: AcknowledgementProps) {
  const [state, setState] = useState(initial);
  const [busy, setBusy] = useState(false);
  const [failed, setFailed] = useState(false);
  const started = useRef(false);

  const change = useCallback(
    async (verb: 'acknowledge' | 'undo') => {
      setBusy(true);
      setFailed(false);
      try {
        const response = await fetch(`${path}/${verb}`, { method: 'POST', headers: { accept: 'application/json' } });
        if (!response.ok) throw new Error(String(response.status));
        setState((await response.json()) as AcknowledgedState);
      } catch {
        setFailed(true);
      } finally {
        setBusy(false);
      }
    },
    [path],
  );

  useEffect(() => {
    if (started.current || !atOnce || initial.acknowledgedAt !== null) return;
    started.current = true;
    void change('acknowledge');
  }, [atOnce, change, initial.acknowledgedAt]);

  const submit = (verb: 'acknowledge' | 'undo') => (event: SubmitEvent) => {
    event.preventDefault();
    void change(verb);
  };
  const done = state.acknowledgedAt !== null;
  return (
    <>
      <p role="status" className="mb-4 text-figureL">
        {done ? (
          <b>Acknowledged, {state.acknowledgedAt}.</b>
        ) : busy ? (
          'Acknowledging…'
        ) : (
          'Not acknowledged. The plant’s team sees who has read this.'
        )}
      </p>
      {failed ? (
        <ErrorState tag="not done">The server did not take it. Nothing was changed; use the button.</ErrorState>
      ) : null}
      {done ? null : (
        <form method="post" action={`${path}/acknowledge`} onSubmit={submit('acknowledge')}>
          <Button variant="primary" type="submit" disabled={busy} className="min-h-11 w-full">
            Acknowledge
          </Button>
        </form>
      )}
      <div className="mt-4 flex flex-wrap gap-2.5">
        {done && state.canUndo ? (
          <form method="post" action={`${path}/undo`} onSubmit={submit('undo')}>
            <Button type="submit" disabled={busy}>
              Undo
            </Button>
          </form>
        ) : null}
        <Button asChild variant="quiet">
          <a href={`${path}/note`}>{done ? 'Add a note' : 'Acknowledge with a note'}</a>
        </Button>
      </div>
    </>
  );
}
