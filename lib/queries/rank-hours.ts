import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import { decodeCursor, pageOf } from '../http/cursor';
import type { Cause } from '../hydronics/types';
import type { HourRow, Rank } from '../schemas/results';
import { hourRecord, SELECT_HOUR, type HourSqlRow } from './hour-record';
import { apiInstant, type PeriodMs } from './period';

interface Order {
  column: string;
  descending: boolean;
  /** `reverse_minutes` is kept in four bytes: a cursor's number is compared in the same. */
  type: 'double precision' | 'real';
}

/** What each ranking puts first; `hour_rank_*` are the partial indexes that hold these orders. */
const ORDERS: Readonly<Record<Rank, Order>> = {
  excess: { column: 'excess_flow_gpm', descending: true, type: 'double precision' },
  cost: { column: 'excess_cost', descending: true, type: 'double precision' },
  deltaT: { column: 'delta_t_f', descending: false, type: 'double precision' },
  reverse: { column: 'reverse_minutes', descending: true, type: 'real' },
};

export interface HoursAsked {
  organizationId: string;
  plantId: string;
  period: PeriodMs;
  rank: Rank;
  /** Every hour in order of time, also the good ones; the rank is then not used. */
  all: boolean;
  cause?: Cause | '' | undefined;
}

const Key = z.tuple([z.number().nullable(), z.iso.datetime()]);
type Position = z.output<typeof Key>;

/**
 * SQL of one page of hours. The order is total (the hour's start breaks ties, what is not known comes last), so that pages have
 * neither gaps nor repeats.
 */
function hoursSql(asked: HoursAsked, after: Position | null, limit: number): { text: string; values: unknown[] } {
  const { period, rank, all } = asked;
  const values: unknown[] = [asked.organizationId, asked.plantId, apiInstant(period.fromMs), apiInstant(period.toMs)];
  const place = (value: unknown) => `$${values.push(value)}`;
  const where = ['h.organization_id = $1', 'h.plant_id = $2', 'h.hour_start >= $3', 'h.hour_start < $4'];
  if (!all) where.push('h.low');
  if (asked.cause) where.push(`h.cause = ${place(asked.cause)}`);
  const { column, descending, type } = ORDERS[rank];
  if (after) {
    const start = place(after[1]);
    if (all) where.push(`h.hour_start > ${start}`);
    else if (after[0] === null) where.push(`h.${column} is null and h.hour_start > ${start}`);
    else {
      const value = `${place(after[0])}::${type}`;
      const beyond = `h.${column} ${descending ? '<' : '>'} ${value}`;
      where.push(`(${beyond} or h.${column} is null or (h.${column} = ${value} and h.hour_start > ${start}))`);
    }
  }
  const order = all ? 'h.hour_start' : `h.${column} ${descending ? 'desc' : 'asc'} nulls last, h.hour_start`;
  const text = `${SELECT_HOUR} from hour h where ${where.join(' and ')} order by ${order} limit ${place(limit)}`;
  return { text, values };
}

const keyOf = (asked: HoursAsked, row: HourSqlRow): Position => [
  asked.all ? null : (row[ORDERS[asked.rank].column as 'excess_flow_gpm'] ?? null),
  new Date(row.hour_start.replace(' ', 'T').replace(/([+-]\d\d)$/, '$1:00')).toISOString(),
];

async function readPage(
  em: EntityManager,
  asked: HoursAsked,
  after: Position | null,
  limit: number,
): Promise<HourSqlRow[]> {
  const { text, values } = hoursSql(asked, after, limit);
  return query<HourSqlRow & Record<string, unknown>>(em, text, values);
}

/** One page of the plant's low delta-T hours, the worst first by the ranking asked for; or of all its hours by time. */
export async function rankHours(
  em: EntityManager,
  asked: HoursAsked,
  page: { limit: number; cursor?: string | undefined },
): Promise<{ items: HourRow[]; nextCursor: string | null }> {
  const rows = await readPage(em, asked, decodeCursor(Key, page.cursor), page.limit + 1);
  return pageOf(rows, page.limit, (row) => keyOf(asked, row), hourRecord);
}

/** Rows of a download read in one transaction. */
const DOWNLOAD_ROWS = 1000;

/** Every hour asked for, in the same order, a thousand at a time, each thousand in a short transaction of its own. */
export async function* rankedHours(asked: HoursAsked): AsyncGenerator<HourSqlRow> {
  let after: Position | null = null;
  for (;;) {
    const from: Position | null = after;
    const rows = await withTenant({ organizationIds: [asked.organizationId] }, (em) =>
      readPage(em, asked, from, DOWNLOAD_ROWS),
    );
    yield* rows;
    const last = rows.at(-1);
    if (!last || rows.length < DOWNLOAD_ROWS) return;
    after = keyOf(asked, last);
  }
}
