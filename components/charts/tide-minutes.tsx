'use client';
import { useUnits } from '@/components/shell/units-context';
import { toPrinted } from '@/lib/client/format';
import { formatClock } from '@/lib/client/format-time';
import type { Tide } from '@/lib/schemas/results';
import { niceTicks, tickLabel } from './scales';
import { tideExtent, tideMarks } from './tide-marks';
import { TideShapes } from './tide-svg';
import { timeColumns } from './time-columns';
import { useWidth } from './use-width';

export interface TideMinutesProps {
  /** A few hours by their own interval, about the hour. */
  tide: Tide;
  timeZone: string;
  /** The hour that stands on tint. */
  hourStart: string;
  heightPx?: number;
}

const HOUR_MS = 3_600_000;

/** Inside and around one hour, interval by interval. Text is the page's own; only ink is drawn. */
export function TideMinutes({ tide, timeZone, hourStart, heightPx = 84 }: TideMinutesProps) {
  const { units } = useUnits();
  const [box, widthPx] = useWidth(800);
  const fromMs = Date.parse(tide.from);
  const toMs = Date.parse(tide.to);
  const marks = tideMarks(tide);
  const tight = tideExtent(marks, 20);
  // Nothing on one side: the still line is that edge of the drawing, with room for half a bead.
  const empty = (side: 'forwardGpm' | 'reverseGpm') =>
    marks.every((mark) => mark[side] === 0 && (mark.direction === 'forward' || mark.direction === 'reverse'));
  const extent = {
    hiGpm: empty('forwardGpm') ? -tight.loGpm * 0.06 : tight.hiGpm,
    loGpm: empty('reverseGpm') ? -tight.hiGpm * 0.06 : tight.loGpm,
  };
  const perGpm = toPrinted(1, 'flow', units);
  const ticks = niceTicks(extent.loGpm * perGpm, extent.hiGpm * perGpm, 4).map((tick) => tick / perGpm);
  const hours = timeColumns(fromMs, toMs, timeZone, 'hour');
  const shownMs = Date.parse(hourStart);
  const x = (ms: number) => ((ms - fromMs) / (toMs - fromMs)) * widthPx;
  const left = (ms: number) => `${(x(ms) / widthPx) * 100}%`;
  const top = (flowGpm: number) => ((extent.hiGpm - flowGpm) / (extent.hiGpm - extent.loGpm)) * heightPx;
  return (
    <div className="grid grid-cols-[48px_minmax(0,1fr)] text-micro text-ink-2">
      <div aria-hidden="true" className="relative">
        {ticks.map((tick) => (
          <span key={tick} className="absolute right-2 -translate-y-1/2" style={{ top: top(tick) }}>
            {tick === 0 ? 'still' : tickLabel(tick, units)}
          </span>
        ))}
      </div>
      <div ref={box} className="min-w-0">
        <svg
          role="img"
          aria-label={`Bypass flow by interval, ${formatClock(fromMs, timeZone)} to ${formatClock(toMs, timeZone)}`}
          viewBox={`0 0 ${widthPx} ${heightPx}`}
          preserveAspectRatio="none"
          width="100%"
          height={heightPx}
          className="block"
        >
          <rect x={x(shownMs)} width={x(shownMs + HOUR_MS) - x(shownMs)} height={heightPx} fill="var(--tint)" />
          {ticks.map((tick) => (
            <line key={tick} x1="0" x2={widthPx} y1={top(tick)} y2={top(tick)} stroke="var(--grid)" />
          ))}
          {hours.map(({ startMs }) => (
            <line
              key={startMs}
              x1={x(startMs)}
              x2={x(startMs)}
              y1="0"
              y2={heightPx}
              stroke="var(--rule)"
              vectorEffect="non-scaling-stroke"
            />
          ))}
          <TideShapes
            marks={marks}
            extent={extent}
            fromMs={fromMs}
            toMs={toMs}
            x={0}
            y={0}
            width={widthPx}
            height={heightPx}
            fringe
          />
        </svg>
      </div>
      <div aria-hidden="true" className="relative col-start-2 h-5">
        {hours.map(({ startMs, label }) => (
          <span
            key={startMs}
            className={`absolute pt-1 pl-1 ${startMs === shownMs ? 'font-semibold text-ink' : ''}`}
            style={{ left: left(startMs) }}
          >
            {label}
          </span>
        ))}
      </div>
    </div>
  );
}
