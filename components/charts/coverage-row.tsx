import type { PointerEvent } from 'react';
import { formatPercent } from '@/lib/client/format';
import type { CoverageRow } from './coverage-calendar';
import { coverageShare } from './coverage-shares';

const BAR_PX = 16;
const FOOT_PX = 18;
const FULL_SHARE = 0.95;
const THIN_SHARE = 0.9;

export interface CoverageRowBarsProps {
  row: CoverageRow;
  days: readonly string[];
  weeks: readonly string[];
  widthPx: number;
  /** The day under the cursor. */
  marked: number | null;
  /** The pointer is over a day; `held` when it was pressed. */
  onPoint: (day: number, held: boolean) => void;
}

/** A point's bars, its name before them and its share of the whole period behind them; hidden from readers, who have the table. */
export function CoverageRowBars({ row, days, weeks, widthPx, marked, onPoint }: CoverageRowBarsProps) {
  const whole = coverageShare(row.days);
  const stepPx = widthPx / Math.max(1, days.length);
  const point = (held: boolean) => (event: PointerEvent<SVGSVGElement>) => {
    const { left, width } = event.currentTarget.getBoundingClientRect();
    const day = Math.floor(((event.clientX - left) / Math.max(1, width)) * days.length);
    onPoint(Math.min(days.length - 1, Math.max(0, day)), held);
  };
  return (
    <>
      <span
        aria-hidden="true"
        title={row.label}
        className="narrow col-start-1 truncate pr-2 text-small font-semibold phone:col-span-2 phone:mt-1"
      >
        {row.label}
      </span>
      <svg
        aria-hidden="true"
        width="100%"
        height="24"
        viewBox={`0 0 ${widthPx} 24`}
        preserveAspectRatio="none"
        className="block cursor-crosshair phone:col-start-1"
        onPointerMove={point(false)}
        onPointerDown={point(true)}
      >
        {marked === null ? null : (
          <rect x={marked * stepPx} y="0" width={stepPx} height="24" fill="var(--tint)" stroke="none" />
        )}
        {weeks.map((day) => {
          const x = days.indexOf(day) * stepPx + 0.5;
          return <line key={day} x1={x} x2={x} y1="0" y2="24" stroke="var(--grid)" />;
        })}
        <line x1="0" x2={widthPx} y1={FOOT_PX + 0.5} y2={FOOT_PX + 0.5} stroke="var(--grid)" />
        {row.days.map((value, index) => {
          const height = (value ?? 0) * BAR_PX;
          return height === 0 ? null : (
            <rect
              key={days[index] ?? index}
              x={index * stepPx + 0.5}
              y={FOOT_PX - height}
              width={Math.max(0.8, stepPx - 1)}
              height={height}
              fill={(value ?? 0) < FULL_SHARE ? 'var(--ink3)' : 'var(--ink2)'}
            />
          );
        })}
        {marked === null ? null : (
          <line
            x1={(marked + 0.5) * stepPx}
            x2={(marked + 0.5) * stepPx}
            y1={FOOT_PX + 1}
            y2="24"
            stroke="var(--ink)"
            strokeWidth={Math.max(2, stepPx - 1)}
          />
        )}
      </svg>
      <span
        aria-hidden="true"
        className={`text-end text-micro ${whole !== null && whole < THIN_SHARE ? 'font-semibold' : 'text-ink-2'}`}
      >
        {whole === null ? '-' : `${formatPercent(whole)}\u00a0%`}
      </span>
    </>
  );
}
