'use client';
import Link from 'next/link';
import { useRouter } from 'next/navigation';
import { RankBar } from '@/components/charts/cause-bars';
import { DirectionMark } from '@/components/marks/direction-mark';
import { plantPath } from '@/components/shell/tabs';
import { useFormat } from '@/components/shell/units-context';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { useRowKeys } from '@/components/ui/use-row-keys';
import { formatHoursMinutes, formatMoney, formatNumber, formatProbability, MISSING } from '@/lib/client/format';
import { formatDayTime } from '@/lib/client/format-time';
import { causeWords, type Direction } from '@/lib/client/words';
import type { HourRow, Rank } from '@/lib/schemas/results';

export interface HoursTableProps {
  plantId: string;
  timeZone: string;
  hours: readonly HourRow[];
  rank: Rank;
  currency?: string;
  /** Number of the first row. */
  firstNumber?: number;
  ringed?: string | null;
  onHover?: (hourStart: string | null) => void;
}

/** The direction most of an hour had, as far as its row can tell. */
export function hourDirection(hour: HourRow): Direction {
  if (hour.reverseMinutes >= 30) return 'reverse';
  return hour.unknownMinutes >= 30 ? 'unknown' : 'forward';
}

const RANKED_BY: Readonly<Record<Rank, (hour: HourRow) => number>> = {
  excess: (hour) => hour.excessFlowGpm ?? 0,
  cost: (hour) => hour.excessCost ?? hour.excessEnergyKwh ?? 0,
  deltaT: (hour) => hour.deltaTF ?? 0,
  reverse: (hour) => hour.reverseMinutes,
};

/** Ranked hours; the ranked column is bold in its head and the only one with bars. */
export function HoursTable({
  plantId,
  timeZone,
  hours,
  rank,
  currency,
  firstNumber = 1,
  ringed = null,
  onHover,
}: HoursTableProps) {
  const print = useFormat();
  const router = useRouter();
  const body = useRowKeys();
  const most = Math.max(1e-9, ...hours.map(RANKED_BY[rank]));
  const bar = (hour: HourRow, of: Rank) =>
    of === rank ? <RankBar share={RANKED_BY[rank](hour) / most} cause={hour.cause} /> : null;
  return (
    <Table caption="Low delta-T hours, worst first" dense hover className="phone:block phone:[&_tbody]:block">
      <thead className="phone:sr-only">
        <tr>
          <HeadCell>no.</HeadCell>
          <HeadCell>hour</HeadCell>
          <HeadCell>
            <span className="sr-only">direction</span>
          </HeadCell>
          <HeadCell numeric ranked={rank === 'reverse'}>
            reverse
            <br />
            h:min
          </HeadCell>
          <HeadCell numeric>
            load
            <br />
            {print.unit('load')}
          </HeadCell>
          <HeadCell numeric ranked={rank === 'deltaT'}>
            load
            <br />
            delta-T {print.unit('temperatureDifference')}
          </HeadCell>
          <HeadCell numeric>
            ex-
            <br />
            pected
          </HeadCell>
          <HeadCell numeric>
            prod.
            <br />
            delta-T
          </HeadCell>
          <HeadCell numeric>
            supply
            <br />
            {print.unit('temperature')}
          </HeadCell>
          <HeadCell numeric ranked={rank === 'excess'}>
            excess flow
            <br />
            {print.unit('flow')}
          </HeadCell>
          <HeadCell>cause, confidence</HeadCell>
          <HeadCell numeric>
            excess
            <br />
            kWh
          </HeadCell>
          <HeadCell numeric ranked={rank === 'cost'}>
            cost
            <br />
            {currency ?? ''}
          </HeadCell>
        </tr>
      </thead>
      <tbody ref={body}>
        {hours.map((hour, index) => {
          const href = `${plantPath(plantId, 'hours')}/${encodeURIComponent(hour.hourStart)}`;
          return (
            <tr
              key={hour.hourStart}
              data-selected={ringed === hour.hourStart}
              onMouseEnter={() => onHover?.(hour.hourStart)}
              onMouseLeave={() => onHover?.(null)}
              onClick={(event) => {
                if (!(event.target as HTMLElement).closest('a')) router.push(href);
              }}
              className="cursor-pointer phone:grid phone:grid-cols-[24px_minmax(0,1fr)_auto_auto] phone:gap-x-3 phone:border-b phone:border-grid phone:py-2 phone:[&>*]:border-0! phone:[&>*]:p-0!"
            >
              <td className="text-ink-3">{firstNumber + index}</td>
              <RowHead className="whitespace-nowrap">
                <Link href={href} className="hover:underline">
                  {formatDayTime(Date.parse(hour.hourStart), timeZone)}
                </Link>
              </RowHead>
              <td>
                <DirectionMark direction={hourDirection(hour)} />
              </td>
              <Cell numeric className="phone:hidden">
                {hour.reverseMinutes > 0 ? formatHoursMinutes(hour.reverseMinutes) : MISSING} {bar(hour, 'reverse')}
              </Cell>
              <Cell numeric className="phone:hidden">
                {print.load(hour.loadTons)}
              </Cell>
              <Cell numeric className="phone:hidden">
                {print.deltaT(hour.deltaTF)}
              </Cell>
              <Cell numeric className="text-ink-2 phone:hidden">
                {print.deltaT(hour.expectedDeltaTF)}
              </Cell>
              <Cell numeric className="phone:hidden">
                {print.deltaT(hour.productionDeltaTF)}
              </Cell>
              <Cell numeric className="phone:hidden">
                {print.temperature(hour.blendedSupplyF)}
              </Cell>
              <Cell numeric className={rank === 'excess' ? 'font-semibold' : ''}>
                <span className="inline-flex items-center justify-end gap-2">
                  {print.flow(hour.excessFlowGpm)}
                  <span className="hidden text-micro font-normal text-ink-3 phone:inline">{print.unit('flow')}</span>
                  {rank === 'excess' ? <span className="w-20 text-start phone:w-14">{bar(hour, 'excess')}</span> : null}
                </span>
              </Cell>
              <td className="phone:col-start-2">
                {causeWords(hour.cause)}{' '}
                {hour.causeConfidence === null || hour.cause === 'none' ? null : (
                  <span className="text-micro text-ink-3">{formatProbability(hour.causeConfidence)}</span>
                )}
              </td>
              <Cell numeric className="phone:hidden">
                {formatNumber(hour.excessEnergyKwh)}
              </Cell>
              <Cell numeric className={`${rank === 'cost' ? 'font-semibold' : ''} phone:col-start-4`}>
                <span className="inline-flex items-center justify-end gap-2">
                  {formatMoney(hour.excessCost, 'hour')}
                  <span className="hidden text-micro font-normal text-ink-3 phone:inline">
                    {hour.excessCost === null ? '' : currency}
                  </span>
                  {rank === 'cost' ? <span className="w-20 text-start phone:hidden">{bar(hour, 'cost')}</span> : null}
                </span>
              </Cell>
            </tr>
          );
        })}
      </tbody>
    </Table>
  );
}
