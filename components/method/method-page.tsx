import { Page } from '@/components/shell/app-shell';
import { PageHead } from '@/components/ui/page-head';
import { formatNumber, formatPercent } from '@/lib/client/format';
import { KERNEL_VERSION } from '@/lib/hydronics/types';
import { ACCURACY, groupOf, measureOf, RIGHT_BEYOND_5 } from './accuracy';
import { Asked } from './asked';
import { CheckYourself } from './check-yourself';
import { HowWell } from './how-well';
import { OneInterval } from './one-interval';
import { Outside } from './outside';
import { Screening } from './screening';
import { Sources } from './sources';
import { TwoTees } from './two-tees';
import { WholeRecord } from './whole-record';

const PARTS = [
  ['asked', 'What is asked'],
  ['tees', 'Two tees and a pipe'],
  ['interval', 'One interval'],
  ['record', 'The whole record'],
  ['screening', 'Before any of it'],
  ['accuracy', 'How well it does'],
  ['outside', 'Held against the outside'],
  ['sources', 'Sources'],
  ['check', 'How to check it yourself'],
] as const;

/** The method of estimation for a reader who doubts it: what is asked, how it is worked out, how well it does, from where. */
export function MethodPage() {
  const [all, near] = [groupOf('all'), groupOf('near balance')];
  const right5 = (group: typeof all) => formatPercent(measureOf(group, RIGHT_BEYOND_5).value, 1);
  return (
    <Page foot={{ kernelVersion: KERNEL_VERSION }}>
      <PageHead
        over="The method, its limits and its sources"
        title="How it is worked out"
        lead={
          <>
            Direction with a probability, bypass and blended supply with a 90&nbsp;% interval, from whatever the plant
            trends. On {all.plants} simulated plants whose truth is known the direction was right in {right5(all)}
            &nbsp;% of the intervals in which over 5&nbsp;% of the flow crossed over, and the error of the bypass was{' '}
            {formatNumber(measureOf(all, 'RMSE of b / textbook').value, { decimals: 2 })} times the textbook formula’s.
            On those near balance it was right in {right5(near)}&nbsp;%.
          </>
        }
        block={[
          { term: 'kernel', value: KERNEL_VERSION },
          { term: 'measured on', value: `${formatNumber(all.intervals)} intervals, ${ACCURACY.fleets.length} fleets` },
          { term: 'answer', value: 'an estimate with its uncertainty' },
          { term: 'writes to', value: 'no control system' },
        ]}
      />
      <nav aria-label="On this page" className="no-print">
        <ol className="flex flex-wrap gap-x-7 phone:grid phone:grid-cols-2 phone:gap-x-4">
          {PARTS.map(([id, title], index) => (
            <li key={id} className="flex items-center phone:min-h-11">
              <a href={`#${id}`} className="link">
                {index + 1}. {title}
              </a>
            </li>
          ))}
        </ol>
      </nav>
      <Asked />
      <TwoTees />
      <OneInterval />
      <WholeRecord />
      <Screening />
      <HowWell />
      <Outside />
      <Sources />
      <CheckYourself />
    </Page>
  );
}
