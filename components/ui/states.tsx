'use client';
import { TriangleAlert } from 'lucide-react';
import { useEffect, useState, type ReactNode } from 'react';
import { TextButton } from './button';
import { Tag } from './tag';

/** Nothing yet: what is so, in bold, then what to do. Stands under the empty datum or table head. */
export function EmptyState({ claim, children }: { claim: string; children?: ReactNode }) {
  return (
    <p className="max-w-[60ch] py-2.5">
      <b>{claim}</b> {children}
    </p>
  );
}

/** Words that appear only when waiting is long enough to notice (400 ms); no spinner, no shimmer. */
export function LoadingWords({ children, className = '' }: { children: ReactNode; className?: string }) {
  const [late, setLate] = useState(false);
  useEffect(() => {
    const timer = setTimeout(() => setLate(true), 400);
    return () => clearTimeout(timer);
  }, []);
  return (
    <p role="status" className={`py-2.5 text-ink-2 italic ${className}`}>
      {late ? children : '\u00a0'}
    </p>
  );
}

export interface ErrorStateProps {
  /** One or two words in the reversed tag: what kind of failure. */
  tag?: string;
  /** What happened, what is safe, what to do. */
  children: ReactNode;
  onRetry?: () => void;
  /** To quote to whoever looks after the service. */
  reference?: string;
}

/** Something failed: the tag, what happened, what to do, a reference. The last good answer stays above it, stale. */
export function ErrorState({ tag = 'not loaded', children, onRetry, reference }: ErrorStateProps) {
  return (
    <p role="alert" className="max-w-[80ch] py-2.5">
      <Tag variant="reversed">{tag}</Tag> {children}{' '}
      {onRetry === undefined ? null : <TextButton onClick={onRetry}>Try again</TextButton>}
      {reference === undefined ? null : <span className="text-ink-2"> · reference {reference}</span>}
    </p>
  );
}

/** Results older than the settings: the old ink stays readable and says which revision it is from. */
export function StaleNote({ revision, children }: { revision: number; children?: ReactNode }) {
  return (
    <p role="status" className="py-2.5">
      <Tag>from settings revision {revision}</Tag> {children}
    </p>
  );
}

/** Work under way on part of what is shown. */
export function PartialNote({ children }: { children: ReactNode }) {
  return (
    <p role="status" className="py-2.5 text-ink-2">
      {children}
    </p>
  );
}

/** Wraps what is drawn from an old answer: the drawings' ink at 0.55, the words and figures in full, or none could read them. */
export function Stale({ stale, children }: { stale: boolean; children: ReactNode }) {
  return <div className={stale ? 'stale' : undefined}>{children}</div>;
}

/** A message that belongs to a form or a section: ink bar at its left, the triangle, words. */
export function Notice({ children, live = false }: { children: ReactNode; live?: boolean }) {
  return (
    <div role={live ? 'alert' : undefined} className="flex gap-2.5 border-l-[3px] border-ink py-1 pl-2.5">
      <TriangleAlert size={16} strokeWidth={1.5} aria-hidden="true" className="mt-0.5 shrink-0" />
      <div>{children}</div>
    </div>
  );
}
