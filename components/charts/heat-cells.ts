import { formatFlow, type UnitSystem, unitLabel } from '@/lib/client/format';
import { formatDayTime, isRepeatedClock, localDay, localDayStarts, localParts } from '@/lib/client/format-time';
import { causeWords, type Direction } from '@/lib/client/words';
import type { HourRow } from '@/lib/schemas/results';

export type HeatKind = 'forward' | 'reverse' | 'still' | 'unknown' | 'not low';

export interface HeatCell {
  hour: HourRow;
  startMs: number;
  /** Column, 0 to 23. */
  clock: number;
  /** Which half of its column: the hour that clocks repeat comes twice. */
  half: 'whole' | 'first' | 'second';
  kind: HeatKind;
  excessGpm: number;
}
export interface HeatRow {
  day: string;
  startMs: number;
  /** A week begins here: ruled in ink. */
  opensWeek: boolean;
  cells: HeatCell[];
}

const HOUR_MINUTES = 60;

/**
 * The direction of an hour from its row: the one that held most minutes. A row tells reverse and unknown minutes only,
 * so that what is neither counts as forward; give the calendar the hours' own directions where they are at hand.
 */
export function hourDirection(hour: Pick<HourRow, 'reverseMinutes' | 'unknownMinutes'>): Direction {
  const rest = HOUR_MINUTES - hour.reverseMinutes - hour.unknownMinutes;
  if (hour.reverseMinutes >= rest && hour.reverseMinutes >= hour.unknownMinutes && hour.reverseMinutes > 0)
    return 'reverse';
  return hour.unknownMinutes > rest ? 'unknown' : 'forward';
}

const nothingRead = (hour: HourRow): boolean => hour.quality === 0 || (hour.quality === null && hour.loadTons === null);

/**
 * Day down, hour across, by the plant's clock. A missing hour leaves its column empty, a repeated one halves it.
 *
 * Shapes  one row a local day of [fromMs, toMs); cells in order of time; hours without data have no cell.
 */
export function heatRows(
  hours: readonly HourRow[],
  fromMs: number,
  toMs: number,
  timeZone: string,
  directionOf: (hour: HourRow) => Direction = hourDirection,
): HeatRow[] {
  const rows = localDayStarts(fromMs, toMs, timeZone).map((startMs, index): HeatRow => ({
    day: localDay(startMs, timeZone),
    startMs,
    opensWeek: index > 0 && localParts(startMs, timeZone).weekday === 'Mon',
    cells: [],
  }));
  const byDay = new Map(rows.map((row) => [row.day, row]));
  for (const hour of hours) {
    if (nothingRead(hour)) continue;
    const startMs = Date.parse(hour.hourStart);
    const row = byDay.get(localDay(startMs, timeZone));
    if (row === undefined) continue;
    const second = isRepeatedClock(startMs, timeZone);
    const first = !second && isRepeatedClock(startMs + HOUR_MINUTES * 60_000, timeZone);
    row.cells.push({
      hour,
      startMs,
      clock: localParts(startMs, timeZone).hour,
      half: second ? 'second' : first ? 'first' : 'whole',
      kind: kindOf(hour, directionOf(hour)),
      excessGpm: Math.max(0, hour.excessFlowGpm ?? 0),
    });
  }
  for (const row of rows) row.cells.sort((left, right) => left.startMs - right.startMs);
  return rows;
}

function kindOf(hour: HourRow, direction: Direction): HeatKind {
  if (direction === 'unknown') return 'unknown';
  return hour.low === 1 ? direction : 'not low';
}

const LEAST_SIDE_PX = 3.2;

/** Side of a square whose area is the excess flow: sqrt(excess / reference) of what the cell holds. */
export function squareSide(excessGpm: number, referenceGpm: number, cellPx: number): number {
  const most = cellPx - 2;
  return Math.min(most, Math.max(LEAST_SIDE_PX, Math.sqrt(excessGpm / referenceGpm) * most));
}

/** A cell's name: "Fri 24 Jul 15:00, reverse, 919 gpm excess, reverse flow". */
export function heatCellName(cell: HeatCell, timeZone: string, units: UnitSystem): string {
  const when = formatDayTime(cell.startMs, timeZone);
  if (cell.kind === 'not low') return `${when}, not low`;
  const excess =
    cell.hour.excessFlowGpm === null ? '' : `, ${formatFlow(cell.excessGpm, units)} ${unitLabel('flow', units)} excess`;
  const cause = cell.hour.cause === 'none' ? '' : `, ${causeWords(cell.hour.cause)}`;
  return `${when}, ${cell.kind}${excess}${cause}`;
}
