'use client';
import { useState } from 'react';
import { INK } from '@/components/marks/pattern-defs';
import { useFormat, useUnits } from '@/components/shell/units-context';
import { decimalsOf, formatNumber } from '@/lib/client/format';
import { ledgerBars, printedAmounts, signWord, type LedgerBar, type LedgerLine } from './ledger-lines';
import { niceTicks } from './scales';
import { useWidth } from './use-width';

export interface DegreeLedgerProps {
  /** Names the account to a reader who cannot see: "Degree ledger, energy-weighted, 333 hours". */
  caption: string;
  lines: readonly LedgerLine[];
  /** A line was chosen (Enter or click): the Hours page filtered to what made most of it. */
  onPick?: (key: string) => void;
  /** The ledger of an hour stands in a narrow column: tighter rows. */
  compact?: boolean;
}

/** An account of degrees: signed word, line, amount, interval, and a bar from running sum to running sum. */
export function DegreeLedger({ caption, lines, onPick, compact = false }: DegreeLedgerProps) {
  const print = useFormat();
  const { units } = useUnits();
  const [tapped, setTapped] = useState<string | null>(null);
  const amounts = printedAmounts(lines, units);
  const rowPx = compact ? 31 : 38;
  const decimals = decimalsOf('temperatureDifference', units);
  const last = lines.length - 1;
  return (
    <div className="@container">
      <div className="grid grid-cols-[max-content_minmax(0,1fr)] gap-x-6 phone:gap-x-3.5">
        <table className="border-collapse">
          <caption className="sr-only">
            {caption}, {print.unit('temperatureDifference')}
          </caption>
          <thead className="sr-only">
            <tr>
              <th scope="col">sign</th>
              <th scope="col">line</th>
              <th scope="col">amount</th>
              <th scope="col">90 % interval</th>
            </tr>
          </thead>
          <tbody>
            {lines.map((line, index) => {
              const amount = amounts[index] ?? Number.NaN;
              const total = line.kind === 'total';
              return (
                <tr
                  key={line.key}
                  style={{ height: rowPx }}
                  className="align-middle"
                  onClick={() => setTapped((before) => (before === line.key ? null : line.key))}
                >
                  <td className="pr-3.5 text-ink-2 italic phone:pr-2">{signWord(line)}</td>
                  <th scope="row" className={`whitespace-nowrap ${total ? 'font-semibold' : 'font-normal'}`}>
                    {onPick === undefined ? (
                      line.label
                    ) : (
                      <button type="button" className="text-start hover:underline" onClick={() => onPick(line.key)}>
                        {line.label}
                      </button>
                    )}
                  </th>
                  <td
                    className={`relative w-16 pl-4 text-end text-figure phone:w-12 phone:pl-2 ${total ? 'font-semibold' : ''}`}
                    data-kind={line.kind}
                  >
                    {total && index > 0 ? <span className="absolute top-0 right-0 left-2 h-px bg-ink" /> : null}
                    {formatNumber(amount, { decimals, sign: total ? 'auto' : 'always' })}
                    {total && index === last ? (
                      <span className="absolute right-0 bottom-0 left-2 h-[3px] border-y border-ink" />
                    ) : null}
                  </td>
                  <td
                    className={`pl-2 text-micro whitespace-nowrap text-ink-2 ${tapped === line.key ? '' : 'phone:sr-only'}`}
                  >
                    {print.plusMinus(line.plusMinusF, 'temperatureDifference')}
                  </td>
                </tr>
              );
            })}
          </tbody>
        </table>
        {/* Too narrow a column has room for the account only. */}
        <div className="min-w-0 @max-[340px]:hidden">
          <Bars lines={lines} rowPx={rowPx} />
        </div>
      </div>
    </div>
  );
}

const TOTAL_PX = 6;
const CHANGE_PX = 11;
const PAINT = {
  total: { fill: 'var(--ink)', stroke: 'none' },
  load: { fill: 'var(--ink3)', stroke: 'none' },
  blend: { fill: INK.reverse[2], stroke: 'var(--rev)' },
  dilution: { fill: 'var(--fwd)', stroke: 'none' },
} as const;

/** Hidden from readers: the numbers are there. Hair-lines carry the running sum from bar to bar. */
function Bars({ lines, rowPx }: { lines: readonly LedgerLine[]; rowPx: number }) {
  const [box, widthPx] = useWidth(330);
  const bars = ledgerBars(lines);
  const ends = bars.flatMap((bar) => (bar === null ? [] : [bar.fromF, bar.toF]));
  const lo = Math.min(0, ...ends);
  const hi = Math.max(1, ...ends) * 1.07;
  const x = (deltaF: number) => ((deltaF - lo) / (hi - lo)) * (widthPx - 1);
  const middle = (index: number) => index * rowPx + rowPx / 2;
  const height = lines.length * rowPx;
  const known = bars
    .map((bar, index) => ({ bar, index }))
    .filter((one): one is { bar: LedgerBar; index: number } => one.bar !== null);
  return (
    <div ref={box} aria-hidden="true" className="min-w-0">
      <svg width="100%" height={height} viewBox={`0 0 ${widthPx} ${height}`} className="block overflow-visible">
        {niceTicks(lo, hi, 4).map((tick) => (
          <line key={tick} x1={x(tick)} x2={x(tick)} y1="0" y2={height} stroke="var(--grid)" />
        ))}
        {known.map(({ bar, index }, place) => {
          const next = known[place + 1];
          const thick = lines[index]?.kind === 'total' ? TOTAL_PX : CHANGE_PX;
          const left = x(Math.min(bar.fromF, bar.toF));
          const paint = PAINT[lines[index]?.ink ?? 'total'];
          return (
            <g key={lines[index]?.key}>
              {next === undefined ? null : (
                <line
                  x1={x(bar.toF)}
                  x2={x(bar.toF)}
                  y1={middle(index) - thick / 2}
                  y2={middle(next.index) + CHANGE_PX / 2}
                  stroke="var(--ink)"
                  strokeWidth="0.8"
                />
              )}
              <rect
                x={left}
                y={middle(index) - thick / 2}
                width={Math.max(0.8, Math.abs(x(bar.toF) - x(bar.fromF)))}
                height={thick}
                strokeWidth="1"
                {...paint}
              />
            </g>
          );
        })}
      </svg>
    </div>
  );
}
