'use client';
import { INK } from '@/components/marks/pattern-defs';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatMoney, formatNumber } from '@/lib/client/format';
import { closeSum } from '@/lib/client/rounding';
import { causeWords, type Cause } from '@/lib/client/words';

export interface CauseTotal {
  cause: Cause;
  hours: number;
  /** null without a tariff: energy is ranked instead. */
  cost: number | null;
  energyKwh: number | null;
}

export interface CauseBarsProps {
  causes: readonly CauseTotal[];
  /** Code of the tariff's currency; absent: energy only. */
  currency?: string;
}

/** The ink of a cause: the water it is about; grey where it is about neither, dots where it is doubt. */
export const CAUSE_PAINT: Readonly<Record<Cause, { fill: string; stroke: string }>> = {
  'surplus-production': { fill: 'var(--fwd)', stroke: 'none' },
  'reverse-flow': { fill: INK.reverse[2], stroke: 'var(--rev)' },
  'sensor-doubt': { fill: INK.unknown, stroke: 'none' },
  'coil-shortfall': { fill: 'var(--ink3)', stroke: 'none' },
  'valve-leakage': { fill: 'var(--ink3)', stroke: 'none' },
  'warm-supply': { fill: 'var(--ink3)', stroke: 'none' },
  'idle-unit-flow': { fill: 'var(--ink3)', stroke: 'none' },
  'light-load': { fill: 'var(--ink3)', stroke: 'none' },
  none: { fill: 'var(--ink3)', stroke: 'none' },
};

/** Hours and cost by cause, the dearest first, each with its bar. What is printed adds up. */
export function CauseBars({ causes, currency }: CauseBarsProps) {
  const worth = (total: CauseTotal) => (currency === undefined ? total.energyKwh : total.cost) ?? 0;
  const sorted = [...causes].sort((left, right) => worth(right) - worth(left));
  const closed = closeSum(sorted.map(worth), 0);
  const most = Math.max(1e-9, ...sorted.map(worth));
  const hours = sorted.reduce((sum, total) => sum + total.hours, 0);
  return (
    <Table caption="Low delta-T hours by cause">
      <thead>
        <tr>
          <HeadCell>cause</HeadCell>
          <HeadCell numeric>hours</HeadCell>
          <HeadCell numeric>{currency ?? 'kWh'}</HeadCell>
          <HeadCell aria-hidden="true" className="w-1/2" />
        </tr>
      </thead>
      <tbody>
        {sorted.map((total, index) => (
          <tr key={total.cause}>
            <RowHead className="whitespace-nowrap">{causeWords(total.cause)}</RowHead>
            <Cell numeric>{formatNumber(total.hours)}</Cell>
            <Cell numeric>{formatMoney(closed.parts[index], 'week')}</Cell>
            <Cell aria-hidden="true">
              <svg width="100%" height="10" className="block overflow-visible">
                <rect
                  y="0.5"
                  width={`${(worth(total) / most) * 96}%`}
                  height="9"
                  strokeWidth="1"
                  {...CAUSE_PAINT[total.cause]}
                />
              </svg>
            </Cell>
          </tr>
        ))}
      </tbody>
      <tfoot>
        <tr>
          <RowHead>all</RowHead>
          <Cell numeric>{formatNumber(hours)}</Cell>
          <Cell numeric>{formatMoney(closed.total, 'week')}</Cell>
          <Cell aria-hidden="true" />
        </tr>
      </tfoot>
    </Table>
  );
}

/** The bar of one ranked value in a table: its length on the list's scale, its ink the cause's. */
export function RankBar({ share, cause }: { share: number; cause: Cause }) {
  return (
    <svg width="76" height="10" aria-hidden="true" className="inline-block align-[-1px] overflow-visible">
      <rect y="0.5" width={Math.max(0.8, Math.min(1, share) * 75)} height="9" strokeWidth="1" {...CAUSE_PAINT[cause]} />
    </svg>
  );
}
