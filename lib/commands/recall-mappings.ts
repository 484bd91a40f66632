import type { EntityManager } from '@mikro-orm/postgresql';
import type { Plant } from '@/entities';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import { ConfirmMapping } from '../schemas/upload';
import type { TablePreview, TimestampPlan, TrendPreview } from '../trends/types';

/** Mappings of other headings that a new heading is compared with, the newest first. */
const MOST_COMPARED = 200;
/** A new heading that shares this part of its columns with an old one is a changed heading, not another file. */
const SHARED_PART = 0.5;
/** Names that columns get for want of one: they say nothing of what is in them. */
const NAMELESS = /^column \d+$/;

/** What is remembered of one heading: its columns by their own names in it (by the point's, where a file holds one point). */
export interface Remembered {
  fingerprint: string;
  confirmed: ConfirmMapping;
}

/** The name a column is remembered by: that of its heading, or of its point where the heading does not name it. */
export const rememberedName = (
  table: { names: readonly unknown[]; shape: { kind: string } },
  { cell, column }: { cell: string; column: string },
): string => (table.names.length === 1 && table.shape.kind === 'wide' ? column : cell);

/**
 * Puts what earlier files of the plant have settled into a fresh preview: columns known from the same heading, or from one that
 * shares most of its columns, are answered and marked. When every column of every table is known and nothing in how the times
 * are written contradicts, that is a confirmed mapping and nobody is asked; else only what is new is left open.
 */
export async function recallMappings(
  plant: Plant,
  preview: TrendPreview,
): Promise<{ preview: TrendPreview; confirmed: ConfirmMapping | null }> {
  const fingerprints = preview.tables.map(({ fingerprint }) => fingerprint);
  const known = await withTenant({ organizationIds: [plant.organizationId] }, (em) =>
    rememberedOf(em, plant, fingerprints),
  );
  const recalled = preview.tables.map((table) => recallTable(table, known));
  const answers = new Map(recalled.flatMap((each) => [...each.answers]));
  const columns = preview.columns.map((column) => {
    const answer = answers.get(column.column);
    if (!answer) return column;
    const { role, unit, unitIndex = null } = answer;
    const reason = 'Read so in earlier files of this plant.';
    return { ...column, role, unit, unitIndex, confidence: 0.99, reason, known: true };
  });
  const tables = preview.tables.map((table, index) => ({
    ...table,
    timestamp: recalled[index]?.timestamp ?? table.timestamp,
  }));
  const [first] = tables;
  const problems = [...preview.problems, ...recalled.flatMap((each) => each.problems)];
  const settled = { ...preview, tables, columns, problems, timestamp: first?.timestamp ?? preview.timestamp };
  const zone = recalled.find((each) => each.timeZone !== null)?.timeZone ?? preview.timeZone;
  if (!recalled.every(({ complete }) => complete)) return { preview: { ...settled, timeZone: zone }, confirmed: null };
  const confirmed: ConfirmMapping = {
    timestamp: settled.timestamp,
    timeZone: zone,
    columns: columns.map(({ column, role, unit, unitIndex }) => {
      const further = answers.get(column)?.further;
      return { column, role, unit, unitIndex, ...(further ? { further } : {}) };
    }),
    tables: tables.map(({ timestamp }) => ({ timestamp })),
    remember: false,
  };
  return { preview: { ...settled, timeZone: zone }, confirmed };
}

async function rememberedOf(em: EntityManager, plant: Plant, fingerprints: readonly string[]): Promise<Remembered[]> {
  const rows = await query<{ fingerprint: string; confirmed: unknown }>(
    em,
    `select fingerprint, confirmed from mapping where organization_id = $1 and plant_id = $2
     order by fingerprint = any($3) desc, created_at desc limit $4`,
    [plant.organizationId, plant.id, fingerprints, fingerprints.length + MOST_COMPARED],
  );
  return rows.flatMap(({ fingerprint, confirmed }) => {
    const parsed = ConfirmMapping.safeParse(confirmed);
    return parsed.success ? [{ fingerprint, confirmed: parsed.data }] : [];
  });
}

interface Recalled {
  /** By the column's name in the drop. */
  answers: Map<string, ConfirmMapping['columns'][number]>;
  timestamp: TimestampPlan | null;
  timeZone: string | null;
  complete: boolean;
  problems: TrendPreview['problems'];
}

const NOTHING: Recalled = { answers: new Map(), timestamp: null, timeZone: null, complete: false, problems: [] };

function recallTable(table: TablePreview, known: readonly Remembered[]): Recalled {
  const same = known.find(({ fingerprint }) => fingerprint === table.fingerprint);
  const from = same ?? closest(table, known);
  if (!from) return NOTHING;
  const stored = new Map(from.confirmed.columns.map((column) => [column.column, column]));
  const answers = new Map(
    table.names.flatMap((name) => {
      const answer = stored.get(rememberedName(table, name));
      return answer ? [[name.column, answer] as const] : [];
    }),
  );
  const timestamp = timestampFrom(table, from.confirmed.timestamp);
  const complete = answers.size === table.names.length && timestamp !== null;
  const gone = same ? [] : goneFrom(table, from);
  return {
    answers,
    timestamp: timestamp ?? table.timestamp,
    timeZone: from.confirmed.timeZone,
    complete,
    problems: gone,
  };
}

/**
 * The remembered way of reading the times, where this file's heading has those columns and its times do not say otherwise; the
 * year of a form that has none is this file's own. Null where a person has to look.
 */
function timestampFrom(table: TablePreview, remembered: TimestampPlan): TimestampPlan | null {
  const { timestamp } = table;
  const sameColumns = remembered.columns.every((column) => timestamp.columns.includes(column));
  if (!sameColumns || (remembered.form !== timestamp.form && !interchangeable(remembered, timestamp))) return null;
  return { ...remembered, ...(timestamp.year == null ? {} : { year: timestamp.year }) };
}

/** Month and day in either order: the file itself may not tell, and what was confirmed before does. */
const interchangeable = (a: TimestampPlan, b: TimestampPlan): boolean =>
  [a.form, b.form].every((form) => form === 'month/day/year' || form === 'day/month/year') ||
  [a.form, b.form].every((form) => form === 'month/day' || form === 'day/month');

function closest(table: TablePreview, known: readonly Remembered[]): Remembered | null {
  const names = table.names.map((name) => rememberedName(table, name)).filter((name) => !NAMELESS.test(name));
  const onePoint = table.names.length === 1 && table.names[0]?.cell !== table.names[0]?.column;
  let best: { from: Remembered; shared: number } | null = null;
  for (const from of known) {
    const theirs = new Set(from.confirmed.columns.map(({ column }) => column));
    const shared = names.filter((name) => theirs.has(name)).length;
    if (shared > (best?.shared ?? 0)) best = { from, shared };
  }
  if (!best) return null;
  // One shared name of a wide file is a coincidence; a file that holds one point is known by that point's name.
  const enough = onePoint || best.shared >= 2;
  return enough && best.shared >= SHARED_PART * table.names.length ? best.from : null;
}

function goneFrom(table: TablePreview, from: Remembered): TrendPreview['problems'] {
  const here = new Set(table.names.map((name) => rememberedName(table, name)));
  const gone = from.confirmed.columns.filter(({ column, role }) => role !== 'ignore' && !here.has(column));
  if (gone.length === 0 || table.shape.kind === 'long') return [];
  const names = gone
    .slice(0, 4)
    .map(({ column }) => `"${column}"`)
    .join(', ');
  const more = gone.length > 4 ? ` and ${gone.length - 4} more` : '';
  const message = `${names}${more} came with earlier files like this one and is not in it. What was stored stays; nothing new is added there.`;
  return [{ code: 'column-gone', severity: 'warning', message, count: gone.length }];
}
