import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import type { ResultDay } from '../db/blocks';
import { dayStartMs } from '../db/days';
import { withTenant } from '../db/tenant';
import { decodeCursor, encodeCursor } from '../http/cursor';
import { DIRECTIONS, REASONS, RESULT_CHANNELS, STATES, type ResultChannel } from '../hydronics/types';
import type { CsvCell } from '../http/csv';
import type { IntervalRow } from '../schemas/results';
import { siColumn } from '../http/si-units';
import { figure } from './figures';
import { DAY_MS } from './local-time';
import { apiInstant, type PeriodMs } from './period';
import { resultSlices, slotsInside } from './result-slices';

/** What tells how well an interval's measurements fit together is told hour by hour, not in the interval rows of the contract. */
const FIT_CHANNELS: readonly string[] = ['chi_square', 'redundancy', 'at_odds'];
const INTERVAL_CHANNELS = RESULT_CHANNELS.filter((channel) => !FIT_CHANNELS.includes(channel));
/** The columns of the CSV, in the contract's order. */
export const INTERVAL_COLUMNS = ['timestamp', ...INTERVAL_CHANNELS] as const;

interface Owner {
  organizationId: string;
  plantId: string;
}

const value = (day: ResultDay, channel: ResultChannel, slot: number): number => day.channels[channel]?.[slot] ?? NaN;
const word = <Word extends string>(words: readonly Word[], code: number, otherwise: Word): Word =>
  words[code] ?? otherwise;
const truth = (code: number): boolean | null => (Number.isNaN(code) ? null : code === 1);

function intervalRow(day: ResultDay, slot: number): IntervalRow {
  const of = (channel: ResultChannel) => figure(value(day, channel, slot));
  return {
    timestamp: apiInstant(dayStartMs(day.day) + slot * day.stepMinutes * 60_000),
    direction: word(DIRECTIONS, value(day, 'direction', slot), 'unknown'),
    reverseProbability: of('reverse_probability'),
    bypassFlowGpm: of('bypass_flow_gpm'),
    bypassFlowLoGpm: of('bypass_flow_lo_gpm'),
    bypassFlowHiGpm: of('bypass_flow_hi_gpm'),
    blendedSupplyF: of('blended_supply_f'),
    blendedSupplyLoF: of('blended_supply_lo_f'),
    blendedSupplyHiF: of('blended_supply_hi_f'),
    primaryFlowGpm: of('primary_flow_gpm'),
    secondaryFlowGpm: of('secondary_flow_gpm'),
    primarySupplyF: of('primary_supply_f'),
    primaryReturnF: of('primary_return_f'),
    secondaryReturnF: of('secondary_return_f'),
    loadTons: of('load_tons'),
    loadDeltaTF: of('load_delta_t_f'),
    productionDeltaTF: of('production_delta_t_f'),
    steady: truth(value(day, 'steady', slot)),
    quality: of('quality'),
    state: word(STATES, value(day, 'state', slot), 'unknown'),
    reason: word(REASONS, value(day, 'reason', slot), ''),
  };
}

const Key = z.tuple([z.number().int()]);

/** Intervals of a period in order of time, at most `limit`; the cursor is the last one's instant. */
export async function listIntervals(
  em: EntityManager,
  owner: Owner,
  period: PeriodMs,
  page: { limit: number; cursor?: string | undefined },
): Promise<{ items: IntervalRow[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, page.cursor);
  const rest = { ...period, fromMs: Math.max(period.fromMs, (after?.[0] ?? -Infinity) + 1) };
  const items: IntervalRow[] = [];
  if (rest.fromMs >= rest.toMs) return { items, nextCursor: null };
  let lastMs = 0;
  // Days that a page fills at one-minute intervals, so that a short page does not read a month.
  const firstDays = 1 + Math.ceil(page.limit / 1440);
  for await (const day of resultSlices(em, owner, rest, INTERVAL_CHANNELS, firstDays)) {
    const start = dayStartMs(day.day);
    const { first, end } = slotsInside(start, day.stepMinutes, day.channels.direction?.length ?? 0, rest);
    for (let slot = first; slot < end; slot++) {
      if (items.length === page.limit) return { items, nextCursor: encodeCursor([lastMs]) };
      items.push(intervalRow(day, slot));
      lastMs = start + slot * day.stepMinutes * 60_000;
    }
  }
  return { items, nextCursor: null };
}

/** Days read in one transaction of a download: it never holds one while the reader takes its time. */
const DOWNLOAD_DAYS = 4;
const CODES: Readonly<Partial<Record<ResultChannel, readonly string[]>>> = {
  direction: DIRECTIONS,
  state: STATES,
  reason: REASONS,
};

/** Header of the CSV in the units asked for. */
export const intervalHeader = (units: 'ip' | 'si'): string[] =>
  INTERVAL_COLUMNS.map((column) => (units === 'si' ? (siColumn(column)?.name ?? column) : column));

/** Every interval of a period as cells of the CSV, a few days at a time, each in a short transaction of its own. */
export async function* intervalCells(
  owner: Owner,
  period: PeriodMs,
  units: 'ip' | 'si',
): AsyncGenerator<readonly CsvCell[]> {
  const write = INTERVAL_CHANNELS.map((channel) => cellOf(channel, units));
  const days = Math.ceil((period.toMs - period.fromMs) / DAY_MS);
  for (let done = 0; done <= days; done += DOWNLOAD_DAYS) {
    const part = {
      fromMs: period.fromMs + done * DAY_MS,
      toMs: Math.min(period.toMs, period.fromMs + (done + DOWNLOAD_DAYS) * DAY_MS),
    };
    if (part.fromMs >= part.toMs) return;
    for (const day of await readPart(owner, part)) {
      const start = dayStartMs(day.day);
      const { first, end } = slotsInside(start, day.stepMinutes, day.channels.direction?.length ?? 0, part);
      for (let slot = first; slot < end; slot++) {
        const timestamp = apiInstant(start + slot * day.stepMinutes * 60_000);
        yield [timestamp, ...INTERVAL_CHANNELS.map((channel, index) => write[index]?.(value(day, channel, slot)))];
      }
    }
  }
}

async function readPart(owner: Owner, part: PeriodMs): Promise<ResultDay[]> {
  return withTenant({ organizationIds: [owner.organizationId] }, async (em) => {
    const days: ResultDay[] = [];
    for await (const day of resultSlices(em, owner, part, INTERVAL_CHANNELS)) days.push(day);
    return days;
  });
}

function cellOf(channel: ResultChannel, units: 'ip' | 'si'): (value: number) => CsvCell {
  const words = CODES[channel];
  if (words) return (code) => words[code] ?? (channel === 'reason' ? '' : 'unknown');
  const si = units === 'si' ? siColumn(channel) : null;
  return si ? (each) => figure(si.convert(each)) : figure;
}
