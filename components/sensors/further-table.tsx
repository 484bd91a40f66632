'use client';
import { Whisker } from '@/components/charts/whisker';
import { useFormat } from '@/components/shell/units-context';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatNumber, formatPercent, NO_BREAK_SPACE } from '@/lib/client/format';
import type { FurtherSensor } from '@/lib/schemas/sensors';

/** Half-widths now and with it, in gpm where any flow is known, else as shares of the main flow. */
function halves(further: FurtherSensor): { now: number; withIt: number; share: boolean } | null {
  const { nowHalfWidthGpm, withHalfWidthGpm, nowHalfWidthShare, withHalfWidthShare } = further;
  if (nowHalfWidthGpm !== null && withHalfWidthGpm !== null)
    return { now: nowHalfWidthGpm, withIt: withHalfWidthGpm, share: false };
  if (nowHalfWidthShare !== null && withHalfWidthShare !== null)
    return { now: nowHalfWidthShare, withIt: withHalfWidthShare, share: true };
  return null;
}

/** The further points that would narrow the answer, best first: what is now beside what it would be. */
export function FurtherTable({ further }: { further: readonly FurtherSensor[] }) {
  const print = useFormat();
  const widest = Math.max(1e-9, ...further.map((each) => halves(each)?.now ?? 0));
  const share = further.some((each) => halves(each)?.share);
  const unit = share ? '%' : print.unit('flow');
  const figure = (half: number) => `±${share ? formatPercent(half, 1) : print.flow(half)}`;
  return (
    <Table
      caption="What one more point would do to this record"
      className="[&_tbody_:is(th,td)]:align-middle phone:block phone:[&_tbody]:block"
    >
      <thead className="phone:sr-only">
        <tr>
          <HeadCell>
            <span className="sr-only">no.</span>
          </HeadCell>
          <HeadCell>point</HeadCell>
          <HeadCell>why</HeadCell>
          <HeadCell className="w-[190px]">
            bypass interval, {unit}
            <span aria-hidden="true" className="grid w-[180px] grid-cols-3">
              <span>{figure(widest).replace('±', '−')}</span>
              <span className="text-center">0</span>
              <span className="text-end">{figure(widest).replace('±', '+')}</span>
            </span>
          </HeadCell>
          <HeadCell numeric>now</HeadCell>
          <HeadCell numeric>with it</HeadCell>
          <HeadCell numeric>unknown hours</HeadCell>
          <HeadCell numeric>effort</HeadCell>
        </tr>
      </thead>
      <tbody>
        {further.map((each, index) => {
          const half = halves(each);
          const hours = (count: number) => formatNumber(count);
          return (
            <tr
              key={`${each.role}/${each.kind}`}
              className="phone:grid phone:grid-cols-[24px_minmax(0,1fr)_120px] phone:gap-x-2 phone:border-b phone:border-grid phone:py-2.5 phone:[&>*]:border-0! phone:[&>*]:p-0!"
            >
              <td className="font-serif text-[20px] font-medium">{index + 1}</td>
              <RowHead className="font-semibold!">{each.label}</RowHead>
              <td className="text-ink-2 text-pretty phone:order-4 phone:col-span-3">{each.why}</td>
              <td className="phone:order-3">
                {half ? (
                  <>
                    <Whisker
                      lo={-half.now}
                      hi={half.now}
                      domain={[-widest, widest]}
                      quiet
                      height={14}
                      width={180}
                      fluid
                    />
                    <Whisker
                      lo={-half.withIt}
                      hi={half.withIt}
                      domain={[-widest, widest]}
                      bold
                      height={14}
                      width={180}
                      fluid
                    />
                  </>
                ) : null}
              </td>
              <Cell numeric className="text-ink-2 phone:hidden">
                {half ? figure(half.now) : '-'}
              </Cell>
              <Cell numeric className="text-figure font-semibold phone:hidden">
                {half ? figure(half.withIt) : '-'}
              </Cell>
              <Cell numeric className="whitespace-nowrap phone:hidden">
                {hours(each.nowUnknownHours)} to <b>{hours(each.withUnknownHours)}</b>
              </Cell>
              <Cell numeric className="text-ink-2 phone:hidden">
                {each.effort}
              </Cell>
              <td className="hidden phone:order-5 phone:col-span-3 phone:block">
                {half ? (
                  <>
                    bypass {figure(half.now)} to{' '}
                    <b>
                      {figure(half.withIt)}
                      {NO_BREAK_SPACE}
                      {unit}
                    </b>
                    ,{' '}
                  </>
                ) : null}
                unknown hours {hours(each.nowUnknownHours)} to <b>{hours(each.withUnknownHours)}</b>, {each.effort}
              </td>
            </tr>
          );
        })}
      </tbody>
    </Table>
  );
}
