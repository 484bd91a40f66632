'use client';
import { useState, type KeyboardEvent } from 'react';
import { formatPercent } from '@/lib/client/format';
import { addLocalDays } from '@/lib/client/format-time';
import { CoverageRowBars } from './coverage-row';
import { CoverageTable } from './coverage-table';
import { dayName, weekStarts } from './coverage-shares';
import { useWidth } from './use-width';

export interface CoverageRow {
  key: string;
  label: string;
  /** One share a day, 0 to 1; null: nothing was sent. */
  days: readonly (number | null)[];
}
export interface CoverageCalendarProps {
  /** First local day, YYYY-MM-DD. */
  from: string;
  rows: readonly CoverageRow[];
  /** What is known of where a day came from; stands behind its share in the reading. */
  describe?: (day: string) => string;
}

interface Place {
  row: number;
  day: number;
}

/**
 * One row a point, one bar a day; its height is the share of the day that arrived and passed. Blank is missing. The pointer, a tap
 * or the arrow keys read a day out under the bars.
 */
export function CoverageCalendar({ from, rows, describe }: CoverageCalendarProps) {
  const [place, setPlace] = useState<Place | null>(null);
  const [held, setHeld] = useState(false);
  const count = Math.max(0, ...rows.map((row) => row.days.length));
  const days = Array.from({ length: count }, (_, index) => addLocalDays(from, index));
  const weeks = weekStarts(days);
  const [box, widthPx] = useWidth(1140);
  const most = Math.max(1, Math.floor(widthPx / 60));
  const every = Math.max(1, Math.ceil(weeks.length / most));
  const at = (day: string) => (days.indexOf(day) / Math.max(1, count)) * 100;
  const here = place === null ? undefined : rows[place.row];
  const day = place === null ? undefined : days[place.day];
  const move = (event: KeyboardEvent) => {
    const next = moved(event.key, place ?? { row: 0, day: count - 1 }, rows.length, count);
    if (next === undefined) return;
    event.preventDefault();
    setHeld(next !== null);
    setPlace(next);
  };
  return (
    <div>
      <div
        role="group"
        tabIndex={0}
        aria-label="Coverage by point and day: arrow keys move by day and point, Escape leaves"
        onKeyDown={move}
        onPointerLeave={() => {
          if (!held) setPlace(null);
        }}
        className="grid grid-cols-[184px_minmax(0,1fr)_52px] phone:grid-cols-[minmax(0,1fr)_44px]"
      >
        <div aria-hidden="true" ref={box} className="relative col-start-2 h-5 text-micro text-ink-2 phone:col-start-1">
          {weeks
            .filter((_, index) => index % every === 0)
            .map((each) => (
              <span key={each} className="absolute pl-0.5 whitespace-nowrap" style={{ left: `${at(each)}%` }}>
                {dayName(each)}
              </span>
            ))}
        </div>
        {rows.map((row, index) => (
          <CoverageRowBars
            key={row.key}
            row={row}
            days={days}
            weeks={weeks}
            widthPx={widthPx}
            marked={place?.row === index ? place.day : null}
            onPoint={(pointed, isHeld) => {
              // A day that was tapped stays until another one is.
              if (held && !isHeld) return;
              setHeld(isHeld);
              setPlace({ row: index, day: pointed });
            }}
          />
        ))}
      </div>
      <p role="status" className="mt-2 min-h-(--t-body-line) text-ink-2 phone:min-h-[3lh]">
        {here === undefined || day === undefined ? (
          <span aria-hidden="true">Point at a day, or tap it, to read it.</span>
        ) : (
          <>
            <b className="text-ink">{here.label}</b>, {dayName(day, true)}: {shareWords(here.days[place?.day ?? 0])}
            {describe === undefined ? '' : ` ${describe(day)}`}
          </>
        )}
      </p>
      <CoverageTable rows={rows} days={days} weeks={weeks} />
    </div>
  );
}

const shareWords = (share: number | null | undefined): string =>
  share == null || share === 0 ? 'nothing arrived.' : `${formatPercent(share)}\u00a0% of the day arrived.`;

/** Where a key leads: undefined for a key that is none of ours, null to leave. */
function moved(key: string, { row, day }: Place, rows: number, days: number): Place | null | undefined {
  const within = (value: number, size: number) => Math.min(size - 1, Math.max(0, value));
  switch (key) {
    case 'ArrowLeft':
      return { row, day: within(day - 1, days) };
    case 'ArrowRight':
      return { row, day: within(day + 1, days) };
    case 'ArrowUp':
      return { row: within(row - 1, rows), day };
    case 'ArrowDown':
      return { row: within(row + 1, rows), day };
    case 'Home':
      return { row, day: 0 };
    case 'End':
      return { row, day: days - 1 };
    case 'Escape':
      return null;
    default:
      return undefined;
  }
}
