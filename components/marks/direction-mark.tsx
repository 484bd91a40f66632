import type { Direction } from '@/lib/client/words';
import { INK } from './pattern-defs';

export interface DirectionMarkProps {
  direction: Direction | 'no data';
  /** Said to a reader who cannot see the mark. Leave out where the word stands beside it. */
  label?: string;
  className?: string;
}

/** A direction, 16 px, standing on the still line of its neighbours: block above, hatched below, bead, dots through. */
export function DirectionMark({ direction, label, className = '' }: DirectionMarkProps) {
  const named = label === undefined ? { 'aria-hidden': true } : { role: 'img', 'aria-label': label };
  return (
    <svg
      width="16"
      height="16"
      viewBox="0 0 16 16"
      focusable="false"
      className={`inline-block shrink-0 align-[-3px] ${className}`}
      {...named}
    >
      <MarkShape direction={direction} />
    </svg>
  );
}

function MarkShape({ direction }: Pick<DirectionMarkProps, 'direction'>) {
  const line = (x1: number, x2: number) => (
    <line x1={x1} x2={x2} y1="8" y2="8" stroke="var(--ink)" strokeWidth="1.25" />
  );
  if (direction === 'forward') {
    return (
      <>
        <rect x="3.5" y="1.5" width="9" height="6.5" fill="var(--fwd)" />
        {line(0, 16)}
      </>
    );
  }
  if (direction === 'reverse') {
    return (
      <>
        <rect x="3.5" y="8" width="9" height="6.5" fill={INK.reverse[2]} stroke="var(--rev)" strokeWidth="1" />
        {line(0, 16)}
      </>
    );
  }
  if (direction === 'still') {
    return (
      <>
        {line(0, 16)}
        <rect x="4" y="5" width="8" height="6" fill="var(--paper)" stroke="var(--ink)" strokeWidth="1.2" />
      </>
    );
  }
  if (direction === 'unknown') {
    return (
      <>
        {line(0, 16)}
        <rect
          x="3.5"
          y="2.5"
          width="9"
          height="11"
          fill={INK.unknown}
          stroke="var(--ink3)"
          strokeWidth="1"
          strokeDasharray="2 1.5"
        />
      </>
    );
  }
  return (
    <>
      {line(0, 4.5)}
      {line(11.5, 16)}
    </>
  );
}
