import type { ReactNode } from 'react';

export interface TitleBlockItem {
  term: string;
  value: ReactNode;
}

/** What the page rests on (period, step, data through, coverage, design), like the corner of a surveyor's sheet. */
export function TitleBlock({ items, className = '' }: { items: readonly TitleBlockItem[]; className?: string }) {
  return (
    <dl
      className={`grid shrink-0 grid-cols-[max-content_minmax(0,max-content)] gap-x-3.5 border-l border-ink pl-3.5 text-small ${className}`}
    >
      {items.map(({ term, value }) => (
        <div key={term} className="col-span-2 grid grid-cols-subgrid">
          <dt className="text-ink-3">{term}</dt>
          <dd>{value}</dd>
        </div>
      ))}
    </dl>
  );
}
