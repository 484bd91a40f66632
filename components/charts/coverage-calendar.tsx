'use client';
import { formatPercent } from '@/lib/client/format';
import { addLocalDays } from '@/lib/client/format-time';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
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
  /** A gap was chosen: what would fill it. */
  onPick?: (key: string, day: string) => void;
}

const BAR_PX = 16;
const FULL_SHARE = 0.95;
const THIN_SHARE = 0.9;

const share = (days: readonly (number | null)[]): number | null => {
  if (days.length === 0 || days.every((day) => day === null)) return null;
  return days.reduce<number>((sum, day) => sum + (day ?? 0), 0) / days.length;
};

const dayName = (day: string): string =>
  new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'short', timeZone: 'UTC' }).format(Date.parse(day));

/** One row a point, one bar a day; its height is the share of the day that arrived and passed. Blank is missing. */
export function CoverageCalendar({ from, rows, onPick }: CoverageCalendarProps) {
  const count = Math.max(0, ...rows.map((row) => row.days.length));
  const days = Array.from({ length: count }, (_, index) => addLocalDays(from, index));
  const weeks = days.filter((day, index) => index === 0 || new Date(`${day}T00:00:00Z`).getUTCDay() === 1);
  const [box, widthPx] = useWidth(1140);
  const most = Math.max(1, Math.floor(widthPx / 60));
  const every = Math.max(1, Math.ceil(weeks.length / most));
  const at = (day: string) => (days.indexOf(day) / Math.max(1, count)) * 100;
  return (
    <div>
      <div
        aria-hidden="true"
        className="grid grid-cols-[150px_minmax(0,1fr)_52px] phone:grid-cols-[120px_minmax(0,1fr)_40px]"
      >
        <div ref={box} className="relative col-start-2 h-5 text-micro text-ink-2">
          {weeks
            .filter((_, index) => index % every === 0)
            .map((day) => (
              <span key={day} className="absolute pl-0.5 whitespace-nowrap" style={{ left: `${at(day)}%` }}>
                {dayName(day)}
              </span>
            ))}
        </div>
        {rows.map((row) => (
          <Row key={row.key} {...{ row, days, weeks, at, widthPx, onPick }} />
        ))}
      </div>
      <CoverageTable rows={rows} days={days} weeks={weeks} />
    </div>
  );
}

interface RowProps {
  row: CoverageRow;
  days: readonly string[];
  weeks: readonly string[];
  at: (day: string) => number;
  widthPx: number;
  onPick?: (key: string, day: string) => void;
}

function Row({ row, days, weeks, at, widthPx, onPick }: RowProps) {
  const whole = share(row.days);
  const stepPx = widthPx / Math.max(1, days.length);
  return (
    <>
      <span className="col-start-1 truncate text-small font-semibold">{row.label}</span>
      <svg width="100%" height="24" viewBox={`0 0 ${widthPx} 24`} className="block">
        {weeks.map((day) => (
          <line
            key={day}
            x1={(at(day) / 100) * widthPx + 0.5}
            x2={(at(day) / 100) * widthPx + 0.5}
            y1="0"
            y2="24"
            stroke="var(--grid)"
          />
        ))}
        <line x1="0" x2={widthPx} y1="18.5" y2="18.5" stroke="var(--grid)" />
        {row.days.map((value, index) => {
          const day = days[index];
          if (day === undefined) return null;
          const height = (value ?? 0) * BAR_PX;
          return (
            <g
              key={day}
              onClick={() => onPick?.(row.key, day)}
              className={onPick === undefined ? '' : 'cursor-pointer'}
            >
              <rect x={index * stepPx} y="2" width={stepPx} height={BAR_PX} fill="transparent" />
              <rect
                x={index * stepPx + 0.5}
                y={18 - height}
                width={Math.max(0.8, stepPx - 1)}
                height={height}
                fill={(value ?? 0) < FULL_SHARE ? 'var(--ink3)' : 'var(--ink2)'}
              />
            </g>
          );
        })}
      </svg>
      <span className={`text-end text-micro ${whole !== null && whole < THIN_SHARE ? 'font-semibold' : 'text-ink-2'}`}>
        {whole === null ? '-' : `${formatPercent(whole)}\u00a0%`}
      </span>
    </>
  );
}

/** The same by week, for readers who cannot see the bars. */
function CoverageTable({
  rows,
  days,
  weeks,
}: {
  rows: readonly CoverageRow[];
  days: readonly string[];
  weeks: readonly string[];
}) {
  const starts = weeks.map((week) => days.indexOf(week));
  return (
    <div className="sr-only">
      <Table bare caption="Coverage: share of each week that arrived and passed, by point">
        <thead>
          <tr>
            <HeadCell>point</HeadCell>
            {weeks.map((week) => (
              <HeadCell key={week}>week of {dayName(week)}</HeadCell>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={row.key}>
              <RowHead>{row.label}</RowHead>
              {weeks.map((week, index) => {
                const part = share(row.days.slice(starts[index] ?? 0, starts[index + 1] ?? days.length));
                return <Cell key={week}>{part === null ? 'none' : `${formatPercent(part)} %`}</Cell>;
              })}
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}
