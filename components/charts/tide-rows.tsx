'use client';
import { ChevronLeft, ChevronRight } from 'lucide-react';
import { useMemo, useRef, type KeyboardEvent, type MouseEvent } from 'react';
import { useFormat } from '@/components/shell/units-context';
import { formatHoursMinutes } from '@/lib/client/format';
import { formatDay, formatDayShort, localDayStarts } from '@/lib/client/format-time';
import type { Tide } from '@/lib/schemas/results';
import { markAt, type Extent, type TideMark } from './tide-marks';
import { TideReading } from './tide-reading';
import { TideShapes } from './tide-svg';
import { barSentence } from './tide-words';
import { useTimeViewState, type TimeView } from './time-view';
import { useWidth } from './use-width';

export interface TideRowsProps {
  tide: Tide | null;
  marks: readonly TideMark[];
  extent: Extent;
  fromMs: number;
  toMs: number;
  timeZone: string;
  hourHref?: (hourStart: string) => string;
  label: string;
  /** Where a tap puts the cursor; without one the rows are a picture. */
  view?: TimeView;
  rowHeightPx?: number;
  /** "rev." or "reverse" over the right column. */
  reverseWord?: string;
}

const HOUR_MS = 3_600_000;
const PLOT_AT_FIRST_PX = 246;

/** The strip one day a row: down is time, nothing scrolls sideways, and the tide table is the right-hand column. */
export function TideRows(props: TideRowsProps) {
  const { tide, marks, extent, fromMs, toMs, timeZone, label, view, rowHeightPx = 44, reverseWord = 'rev.' } = props;
  const days = useMemo(() => {
    const starts = localDayStarts(fromMs, toMs, timeZone);
    return starts.map((startMs, index) => {
      const endMs = starts[index + 1] ?? startMs + 24 * HOUR_MS;
      const inside = marks.filter((mark) => mark.startMs >= startMs && mark.startMs < endMs);
      const bars = inside.map((mark) => tide?.bars[mark.index]).filter((bar) => bar !== undefined);
      const read = bars.some(
        (bar) => bar.forwardMinutes + bar.reverseMinutes + bar.stillMinutes + bar.unknownMinutes > 0,
      );
      const reverseMinutes = read ? bars.reduce((sum, bar) => sum + bar.reverseMinutes, 0) : null;
      return { startMs, endMs, marks: inside, reverseMinutes };
    });
  }, [tide, marks, fromMs, toMs, timeZone]);
  const [plot, widthPx] = useWidth(PLOT_AT_FIRST_PX);
  return (
    <div role="group" aria-label={label}>
      <div aria-hidden="true" className="grid grid-cols-[56px_minmax(0,1fr)_56px] text-micro text-ink-2">
        <span />
        <span ref={plot} className="relative block h-4">
          {[0, 6, 12, 18, 24].map((hour) => (
            <span key={hour} className="absolute -translate-x-1/2" style={{ left: `${(hour / 24) * 100}%` }}>
              {String(hour).padStart(2, '0')}
            </span>
          ))}
        </span>
        <span className="text-end">{reverseWord}</span>
      </div>
      {days.map((day) => (
        <DayRow
          key={day.startMs}
          {...props}
          view={view}
          rowHeightPx={rowHeightPx}
          extent={extent}
          day={day}
          widthPx={widthPx}
        />
      ))}
    </div>
  );
}

interface DayRowProps extends TideRowsProps {
  day: { startMs: number; endMs: number; marks: readonly TideMark[]; reverseMinutes: number | null };
  rowHeightPx: number;
  widthPx: number;
}

function DayRow({ tide, extent, timeZone, hourHref, view, day, rowHeightPx, widthPx }: DayRowProps) {
  const reverse =
    day.reverseMinutes === null ? '-' : day.reverseMinutes === 0 ? '·' : formatHoursMinutes(day.reverseMinutes);
  const drawing = (
    <svg
      viewBox={`0 0 ${widthPx} ${rowHeightPx}`}
      preserveAspectRatio="none"
      width="100%"
      height={rowHeightPx}
      aria-hidden="true"
      className="block overflow-visible"
    >
      {[0, 6, 12, 18, 24].map((hour) => (
        <line
          key={hour}
          x1={(hour / 24) * widthPx}
          x2={(hour / 24) * widthPx}
          y1="3"
          y2={rowHeightPx - 3}
          stroke="var(--grid)"
          vectorEffect="non-scaling-stroke"
        />
      ))}
      <TideShapes
        marks={day.marks}
        extent={extent}
        fromMs={day.startMs}
        toMs={day.endMs}
        x={0}
        y={2}
        width={widthPx}
        height={rowHeightPx - 4}
        fringe
      />
    </svg>
  );
  const name = `${formatDay(day.startMs, timeZone)}, reverse ${reverse === '·' ? '0:00' : reverse}`;
  return (
    <div className="border-b border-grid">
      <div className="grid grid-cols-[56px_minmax(0,1fr)_56px] items-center">
        <span className="text-small font-semibold">{formatDayShort(day.startMs, timeZone)}</span>
        {view === undefined || tide === null ? (
          <span role="img" aria-label={name}>
            {drawing}
          </span>
        ) : (
          <PickableDay {...{ day, view, name, timeZone, tide }}>{drawing}</PickableDay>
        )}
        <span className="text-end text-small font-semibold">{reverse}</span>
      </div>
      {view === undefined || tide === null ? null : <DayReading {...{ tide, timeZone, hourHref, view, day }} />}
    </div>
  );
}

interface PickableProps {
  day: DayRowProps['day'];
  view: TimeView;
  tide: Tide;
  timeZone: string;
  name: string;
  children: React.ReactNode;
}

const centre = (mark: TideMark) => (mark.startMs + mark.endMs) / 2;

/** A day as a slider: a tap or the arrow keys choose an hour; the same tap again, or Enter, opens it. */
function PickableDay({ day, view, tide, timeZone, name, children }: PickableProps) {
  const print = useFormat();
  const box = useRef<HTMLDivElement>(null);
  const cursorMs = useTimeViewState(view, (state) => state.cursorMs);
  const here = cursorMs === null ? null : markAt(day.marks, cursorMs);
  const bar = here === null ? undefined : tide.bars[here.index];
  const open = () => box.current?.closest('div.border-b')?.querySelector<HTMLAnchorElement>('a[data-open]')?.click();
  const choose = (mark: TideMark | null | undefined) => {
    if (!mark) return;
    if (here !== null && mark.index === here.index) open();
    else view.moveCursor(centre(mark), 'key');
  };
  const onClick = (event: MouseEvent<HTMLDivElement>) => {
    const { left, width } = event.currentTarget.getBoundingClientRect();
    choose(markAt(day.marks, day.startMs + ((event.clientX - left) / width) * (day.endMs - day.startMs)));
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const first = day.marks[0];
    const at = here === null ? -1 : here.index - (first?.index ?? 0);
    if (event.key === 'ArrowRight') choose(day.marks[at + 1]);
    else if (event.key === 'ArrowLeft') choose(day.marks[Math.max(0, at - 1)]);
    else if (event.key === 'Home') choose(first);
    else if (event.key === 'End') choose(day.marks.at(-1));
    else if (event.key === 'Enter') open();
    else return;
    event.preventDefault();
  };
  return (
    <div
      ref={box}
      role="slider"
      tabIndex={0}
      aria-label={name}
      aria-valuemin={0}
      aria-valuemax={Math.max(0, day.marks.length - 1)}
      aria-valuenow={here === null ? 0 : here.index - (day.marks[0]?.index ?? 0)}
      aria-valuetext={bar === undefined ? 'no hour chosen' : barSentence(bar, timeZone, print)}
      onClick={onClick}
      onKeyDown={onKeyDown}
      className="relative cursor-pointer"
    >
      {children}
      {here === null ? null : (
        <span
          aria-hidden="true"
          className="chart-cursor"
          style={{ left: `${((centre(here) - day.startMs) / (day.endMs - day.startMs)) * 100}%` }}
        />
      )}
    </div>
  );
}

/** The reading under the day it belongs to, with an hour before and after: the bars are too narrow for a thumb. */
function DayReading({
  tide,
  timeZone,
  hourHref,
  view,
  day,
}: Omit<PickableProps, 'name' | 'children'> & Pick<TideRowsProps, 'hourHref'>) {
  const cursorMs = useTimeViewState(view, (state) => state.cursorMs);
  const here = cursorMs === null ? null : markAt(day.marks, cursorMs);
  const bar = here === null ? undefined : tide.bars[here.index];
  if (here === null || bar === undefined) return null;
  const at = here.index - (day.marks[0]?.index ?? 0);
  const step = (mark: TideMark | undefined, word: string, Icon: typeof ChevronLeft) => (
    <button
      type="button"
      aria-label={word}
      disabled={mark === undefined}
      onClick={() => (mark === undefined ? undefined : view.moveCursor(centre(mark), 'key'))}
      className="flex size-11 shrink-0 items-center justify-center disabled:text-rule"
    >
      <Icon size={16} strokeWidth={1.5} aria-hidden="true" />
    </button>
  );
  return (
    <div className="flex items-center bg-tint">
      {step(day.marks[at - 1], 'bar before', ChevronLeft)}
      <div className="min-w-0 grow py-1.5">
        <TideReading bar={bar} barMinutes={tide.barMinutes} timeZone={timeZone} hourHref={hourHref} />
      </div>
      {step(day.marks[at + 1], 'bar after', ChevronRight)}
    </div>
  );
}
