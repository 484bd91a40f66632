import type { ReactNode } from 'react';

/** A key of the keyboard. */
export function KeyCap({ children }: { children: ReactNode }) {
  return (
    <kbd className="inline-block min-w-4.5 rounded border border-rule px-1 text-center font-sans text-small">
      {children}
    </kbd>
  );
}

/** An arrow key, drawn: the fonts lack two of the four arrows. */
export function ArrowKeyCap({ to }: { to: 'left' | 'right' | 'up' | 'down' }) {
  const turn = { left: 180, right: 0, up: -90, down: 90 }[to];
  return (
    <kbd className="inline-flex min-w-4.5 items-center justify-center rounded border border-rule px-1 align-[-3px]">
      <svg width="10" height="15" viewBox="0 0 10 15" role="img" aria-label={`arrow ${to}`}>
        <g transform={`rotate(${turn} 5 7.5)`} fill="none" stroke="currentColor" strokeWidth="1.2">
          <path d="M0.5 7.5H9" />
          <path d="M6 4.5L9 7.5L6 10.5" />
        </g>
      </svg>
    </kbd>
  );
}
