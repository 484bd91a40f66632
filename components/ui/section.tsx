import type { ReactNode } from 'react';

export interface SectionProps {
  title: string;
  /** A few words after the title, in second ink. */
  sub?: ReactNode;
  /** At the right of the heading line: a reading, a key, a link. */
  aside?: ReactNode;
  /** The ink rule that opens a section across its own columns. */
  ruled?: boolean;
  id?: string;
  className?: string;
  children: ReactNode;
}

/** A part of a page: ink rule, heading line, content. */
export function Section({ title, sub, aside, ruled = true, id, className = '', children }: SectionProps) {
  return (
    <section aria-label={title} id={id} className={`min-w-0 ${ruled ? 'border-t border-ink pt-2.5' : ''} ${className}`}>
      <SectionHead title={title} sub={sub} aside={aside} />
      {children}
    </section>
  );
}

/** The heading line alone. */
export function SectionHead({ title, sub, aside }: Pick<SectionProps, 'title' | 'sub' | 'aside'>) {
  return (
    <div className="mb-2.5 flex flex-wrap items-baseline justify-between gap-x-6 gap-y-1">
      <h2 className="font-semibold">
        {title}
        {sub === undefined ? null : <span className="ml-3.5 font-normal text-ink-2 phone:ml-0 phone:block">{sub}</span>}
      </h2>
      {aside === undefined ? null : <div className="text-ink-2">{aside}</div>}
    </div>
  );
}
