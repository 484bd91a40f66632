import type { ReactNode } from 'react';
import { TitleBlock, type TitleBlockItem } from './title-block';

export interface PageHeadProps {
  /** A line over the title: where this page stands. */
  over?: ReactNode;
  title: string;
  /** The finding, in one sentence. */
  lead: ReactNode;
  block?: readonly TitleBlockItem[];
  /** Buttons; at the right, after the lead on a phone. */
  actions?: ReactNode;
}

/** Title, the one sentence that states the finding, and the title block. Once a page. */
export function PageHead({ over, title, lead, block, actions }: PageHeadProps) {
  return (
    <div className="flex items-end justify-between gap-11 pt-6 pb-4.5 phone:block phone:pt-3.5">
      <div className="min-w-0 max-w-[860px]">
        {over === undefined ? null : <p className="mb-1 text-ink-2">{over}</p>}
        <h1 className="mb-2 font-serif text-title font-medium text-balance">{title}</h1>
        <p className="serif-numbers font-serif text-lead text-pretty">{lead}</p>
      </div>
      <div className="flex shrink-0 items-end gap-11 phone:block">
        {block === undefined ? null : <TitleBlock items={block} className="phone:mt-4" />}
        {actions === undefined ? null : (
          <div className="flex shrink-0 gap-2.5 phone:mt-4 phone:flex-wrap">{actions}</div>
        )}
      </div>
    </div>
  );
}
