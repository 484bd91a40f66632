import type { ReactNode } from 'react';

export interface PartProps {
  id: string;
  number: number;
  title: string;
  sub?: string;
  /** Words, at the width that reads well. */
  children: ReactNode;
  /** Tables and drawings, at the right; below the words where it is narrow. */
  beside?: ReactNode;
}

/** One numbered part of the page: words at the left, numbers at the right. */
export function Part({ id, number, title, sub, children, beside }: PartProps) {
  return (
    <section id={id} aria-labelledby={`${id}-title`} className="mt-10 scroll-mt-4 border-t border-ink pt-2.5">
      <div className="mb-3 flex flex-wrap items-baseline gap-x-3.5">
        <h2 id={`${id}-title`} className="font-serif text-lead font-medium">
          {number}. {title}
        </h2>
        {sub === undefined ? null : <p className="text-ink-2">{sub}</p>}
      </div>
      <div className="grid grid-cols-[minmax(0,560px)_minmax(0,1fr)] gap-x-13 narrow:block">
        <div className="text-figure leading-[1.45]">{children}</div>
        {beside === undefined ? null : <div className="min-w-0 narrow:mt-5">{beside}</div>}
      </div>
    </section>
  );
}

export function P({ children }: { children: ReactNode }) {
  return <p className="mb-3 text-pretty">{children}</p>;
}

/** A heading within a part. */
export function Head({ children }: { children: ReactNode }) {
  return <h3 className="mt-5 mb-1 first:mt-0">{children}</h3>;
}

/** Formulas, a line each. */
export function Formulas({ children }: { children: ReactNode }) {
  return <div className="mb-3 grid gap-1 border-l border-ink pl-3.5">{children}</div>;
}

/** A table or a drawing with its name over it and its source under it. */
export function Exhibit({ name, source, children }: { name: string; source?: ReactNode; children: ReactNode }) {
  return (
    <div className="mb-7 last:mb-0">
      <p className="mb-1.5 text-ink-2">{name}</p>
      {children}
      {source === undefined ? null : <p className="mt-2 max-w-[92ch] text-small text-pretty text-ink-2">{source}</p>}
    </div>
  );
}

/** A command to be typed, which may be broken anywhere. */
export function Command({ children }: { children: string }) {
  return <code className="font-sans font-semibold [overflow-wrap:anywhere]">{children}</code>;
}

/** A temperature of the loop, as the trade writes it: p primary, s secondary; s supply, r return; b the common pipe. */
export function T({ at }: { at: 'ps' | 'ss' | 'sr' | 'pr' | 'b' }) {
  return (
    <span className="whitespace-nowrap">
      T<Sub>{at}</Sub>
    </span>
  );
}

/** A flow of the loop: p primary, s secondary, b as a meter in the common pipe reads it. */
export function F({ at }: { at: 'p' | 's' | 'b' }) {
  return (
    <span className="whitespace-nowrap">
      F<Sub>{at}</Sub>
    </span>
  );
}

/** A subscript that leaves the lines where they are. */
export function Sub({ children }: { children: ReactNode }) {
  return <sub className="text-[0.78em] leading-none">{children}</sub>;
}
