import type { ReactNode } from 'react';
import { Page } from '@/components/shell/app-shell';
import { PageHead } from '@/components/ui/page-head';
import { EXPORT_GROUPS, EXPORT_SHAPES } from '@/lib/trends/gallery';
import { ShapeTable } from './shape-table';

const ASKED = EXPORT_SHAPES.filter(({ asks }) => asks !== undefined);
const FREE = EXPORT_SHAPES.length - ASKED.length;

const REFUSED = { id: 'not-read', title: 'What is refused' };
const titleOf = (title: string, index: number): string => `${index + 1}. ${title}`;

/** What exports are read, with an example of each: the list that the tests go through. */
export function FormatsPage() {
  return (
    <Page foot={{ right: 'One list for this page and for the tests' }}>
      <PageHead
        over="Uploads"
        title="What files are read"
        lead={
          <>
            Whatever the plant’s control system exports: {EXPORT_SHAPES.length} ways to write a trend are read as they
            are, {FREE} of them with nothing to do but to confirm what each column was taken for.
          </>
        }
        block={[
          { term: 'shapes', value: String(EXPORT_SHAPES.length) },
          { term: 'with a question', value: String(ASKED.length) },
          { term: 'refused rows', value: 'counted, and shown with their number' },
        ]}
      />
      <nav aria-label="On this page" className="no-print">
        <ol className="flex flex-wrap gap-x-7 phone:grid phone:grid-cols-2 phone:gap-x-4">
          {[...EXPORT_GROUPS, REFUSED].map(({ id, title }, index) => (
            <li key={id} className="flex items-center phone:min-h-11">
              <a href={`#${id}`} className="link">
                {titleOf(title, index)}
              </a>
            </li>
          ))}
        </ol>
      </nav>
      {EXPORT_GROUPS.map((group, index) => (
        <FormatPart key={group.id} id={group.id} title={titleOf(group.title, index)}>
          <p className="mb-3 max-w-[92ch] text-pretty">{group.lead}</p>
          <ShapeTable title={group.title} shapes={group.shapes} />
        </FormatPart>
      ))}
      <FormatPart id={REFUSED.id} title={titleOf(REFUSED.title, EXPORT_GROUPS.length)}>
        <p className="max-w-[92ch] text-pretty">
          A file without times or without a table; web pages, PDF documents, pictures and old workbooks (XLS); archives
          that are encrypted, damaged or unpack out of all proportion. The answer says which it is and what to send
          instead. A file is never refused for a few bad rows.
        </p>
      </FormatPart>
    </Page>
  );
}

function FormatPart({ id, title, children }: { id: string; title: string; children: ReactNode }) {
  return (
    <section id={id} aria-labelledby={`${id}-title`} className="mt-10 scroll-mt-4 border-t border-ink pt-2.5">
      <h2 id={`${id}-title`} className="mb-3 font-serif text-lead font-medium">
        {title}
      </h2>
      {children}
    </section>
  );
}
