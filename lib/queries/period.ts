import { addDays, dayOf } from '../db/days';
import { problem } from '../http/problem';
import { DAY_MS, localDayOf, localDayStart } from './local-time';

/** Half-open, epoch ms. */
export interface PeriodMs {
  fromMs: number;
  toMs: number;
}

/** Local days that a page shows when nobody says which. */
export const DEFAULT_PERIOD_DAYS = 14;
/** Ten years: beyond this a period is a slip of the pen, and an answer would not fit in memory. */
const LONGEST_PERIOD_MS = 3660 * DAY_MS;

interface PlantClock {
  timeZone: string;
  dataThrough?: Date | null | undefined;
}

/** Epoch ms of `from` or `to`: an instant with any offset, or the beginning of a local day of the plant. */
export const momentMs = (moment: string, timeZone: string): number =>
  moment.length === 10 ? localDayStart(moment, timeZone) : Date.parse(moment);

/**
 * The period a request means, half-open. Absent bounds: `to` is the end of the local day that holds the last data (of today
 * while there are none), `from` is 14 local days before `to`.
 *
 * Throws  a 400 problem when `from` is not before `to`, or the two are more than ten years apart.
 */
export function resolvePeriod(
  asked: { from?: string | undefined; to?: string | undefined },
  plant: PlantClock,
  nowMs = Date.now(),
): PeriodMs {
  const { timeZone } = plant;
  const lastDay = localDayOf(plant.dataThrough?.getTime() ?? nowMs, timeZone);
  const toMs = asked.to === undefined ? localDayStart(addDays(lastDay, 1), timeZone) : momentMs(asked.to, timeZone);
  const dayOfTo = localDayOf(toMs - 1, timeZone);
  const fromMs =
    asked.from === undefined
      ? localDayStart(addDays(dayOfTo, 1 - DEFAULT_PERIOD_DAYS), timeZone)
      : momentMs(asked.from, timeZone);
  if (!(fromMs < toMs)) throw invalidPeriod('"from" has to lie before "to"; the period is half-open.', 'from');
  if (toMs - fromMs > LONGEST_PERIOD_MS) throw invalidPeriod('Ask for ten years at the most.', 'to');
  return { fromMs, toMs };
}

const invalidPeriod = (message: string, path: string) =>
  problem(400, 'Invalid input', `The period is not right: ${message}`, [{ path, message }]);

/** The UTC days, both included, whose blocks hold a half-open period. */
export const blockDays = ({ fromMs, toMs }: PeriodMs): { fromDay: string; toDay: string } => ({
  fromDay: dayOf(fromMs),
  toDay: dayOf(toMs - 1),
});

/**
 * The UTC days, both included, that hold the part of a record a request names; an absent bound stays open.
 *
 * Throws  a 400 problem when `from` is not before `to`.
 */
export function utcDaysAsked(
  asked: { from?: string | undefined; to?: string | undefined },
  timeZone: string,
): { from?: string; to?: string } {
  const fromMs = asked.from === undefined ? null : momentMs(asked.from, timeZone);
  const toMs = asked.to === undefined ? null : momentMs(asked.to, timeZone);
  if (fromMs !== null && toMs !== null && !(fromMs < toMs)) {
    throw invalidPeriod('"from" has to lie before "to"; the period is half-open.', 'from');
  }
  return {
    ...(fromMs === null ? {} : { from: dayOf(fromMs) }),
    ...(toMs === null ? {} : { to: dayOf(toMs - 1) }),
  };
}

/** The local days, both included, that a half-open period touches. */
export const localDaySpan = ({ fromMs, toMs }: PeriodMs, timeZone: string): { firstDay: string; lastDay: string } => ({
  firstDay: localDayOf(fromMs, timeZone),
  lastDay: localDayOf(toMs - 1, timeZone),
});

/** An instant as the API writes it: ISO 8601 in UTC, to the second where there is nothing below it. */
export const apiInstant = (epochMs: number): string => new Date(epochMs).toISOString().replace('.000Z', 'Z');
