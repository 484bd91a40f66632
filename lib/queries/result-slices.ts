import type { EntityManager } from '@mikro-orm/postgresql';
import { readResults, type ResultDay } from '../db/blocks';
import { addDays } from '../db/days';
import type { ResultChannel } from '../hydronics/types';
import { blockDays, type PeriodMs } from './period';

/** UTC days of estimates held in memory at once. */
const SLICE_DAYS = 31;

/**
 * The days of estimates of a period, in order, a month at a time: memory does not grow with the period. `firstDays` makes the
 * first slice shorter, and each next one twice as long: for a reader that expects to stop early.
 */
export async function* resultSlices(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  period: PeriodMs,
  channels: readonly ResultChannel[],
  firstDays = SLICE_DAYS,
): AsyncGenerator<ResultDay> {
  const { fromDay, toDay } = blockDays(period);
  let days = Math.min(SLICE_DAYS, Math.max(1, firstDays));
  for (let first = fromDay; first <= toDay; first = addDays(first, days), days = Math.min(SLICE_DAYS, 2 * days)) {
    const last = addDays(first, days - 1);
    yield* await readResults(em, owner, first, last < toDay ? last : toDay, channels);
  }
}

/** The slots [first, end) of a stored day that begin inside a period. */
export function slotsInside(
  dayStart: number,
  stepMinutes: number,
  slotCount: number,
  period: PeriodMs,
): { first: number; end: number } {
  const stepMs = stepMinutes * 60_000;
  const slotAt = (epochMs: number) => Math.min(slotCount, Math.max(0, Math.ceil((epochMs - dayStart) / stepMs)));
  return { first: slotAt(period.fromMs), end: slotAt(period.toMs) };
}
