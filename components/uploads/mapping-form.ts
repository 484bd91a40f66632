import {
  IGNORE_ROLE,
  POINT_ROLES,
  POINT_ROLE_NAMES,
  pointRole,
  type MappedRole,
  type PointRoleName,
} from '@/lib/point-roles';
import { TimeZone } from '@/lib/schemas/common';
import type { ConfirmMapping, Preview } from '@/lib/schemas/upload';
import { TREND_UNITS, TREND_UNIT_IDS, type TrendUnitId } from '@/lib/units';
import { needsYear, timesOf, timestampPlan, type TimeAnswer } from './mapping-times';

/** A guess under this is no suggestion: a person has to decide (the API's own bound). */
export const SURE_ENOUGH = 0.5;
const MOST_SHIFT_MINUTES = 2880;

/** One column's answer; role null = still to be decided. */
export interface ColumnAnswer {
  column: string;
  role: MappedRole | null;
  unit: TrendUnitId | null;
  unitIndex: number | null;
  /** One more of its role beside those of other files; else it goes on with the one there. */
  further?: boolean;
}

/** All that is asked about an upload. */
export interface MappingAnswers {
  /** In the preview's order. */
  columns: readonly ColumnAnswer[];
  /** By table of the preview. */
  times: readonly TimeAnswer[];
  timeZone: string;
}

/** How an upload was read, where it was; else what its preview suggests, with what it is unsure of left open. */
export const firstAnswers = (preview: Preview): MappingAnswers => ({
  columns: preview.confirmed ? confirmedAnswers(preview, preview.confirmed) : suggestedAnswers(preview),
  times: timesOf(preview),
  timeZone: preview.confirmed?.timeZone ?? preview.timeZone,
});

/** The answers a preview suggests; what it is unsure of is left open. */
function suggestedAnswers(preview: Preview): ColumnAnswer[] {
  return preview.columns.map(({ column, role, unit, unitIndex, confidence }) => ({
    column,
    role: confidence < SURE_ENOUGH ? null : role,
    unit,
    unitIndex,
  }));
}

function confirmedAnswers(preview: Preview, { columns }: ConfirmMapping): ColumnAnswer[] {
  const given = new Map(columns.map((column) => [column.column, column]));
  return preview.columns.map(({ column }) => {
    const answer = given.get(column);
    // A column that nobody answered is left out by the reader.
    return answer
      ? {
          column,
          role: answer.role,
          unit: answer.unit,
          unitIndex: answer.unitIndex ?? null,
          ...(answer.further ? { further: true } : {}),
        }
      : { column, role: IGNORE_ROLE, unit: null, unitIndex: null };
  });
}

/** An answer with another role: the unit stays where it fits, else the one that is kept inside; a unit's number begins at 1. */
export function withRole(answer: ColumnAnswer, role: MappedRole): ColumnAnswer {
  if (role === IGNORE_ROLE) return { ...answer, role, unit: null, unitIndex: null };
  const { quantity, indexed } = pointRole(role);
  const unit =
    answer.unit !== null && TREND_UNITS[answer.unit].quantity === quantity
      ? answer.unit
      : quantity === 'status'
        ? 'on/off'
        : null;
  return { ...answer, role, unit, unitIndex: indexed ? (answer.unitIndex ?? 1) : null };
}

/** Units a role's column can come in. */
export const unitsFor = (role: PointRoleName): TrendUnitId[] =>
  TREND_UNIT_IDS.filter((id) => TREND_UNITS[id].quantity === pointRole(role).quantity);

export const isOpen = ({ role, unit }: ColumnAnswer): boolean =>
  role === null || (role !== IGNORE_ROLE && unit === null);

/** What is mapped: columns, or, where every table has a row a reading, points. */
export const nounOf = ({ tables }: Preview): 'column' | 'point' =>
  tables.every(({ shape }) => shape.kind === 'long') ? 'point' : 'column';

/** Columns that still lack a role or a unit. */
export const openColumns = (answers: readonly ColumnAnswer[]): ColumnAnswer[] => answers.filter(isOpen);

/** The same answers with everything undecided left out. */
export const withoutOpen = (answers: readonly ColumnAnswer[]): ColumnAnswer[] =>
  answers.map((answer) => (isOpen(answer) ? withRole(answer, IGNORE_ROLE) : answer));

/** What is wrong with how the times are read, in words; null when nothing is. */
export function timesProblem({ times, timeZone }: MappingAnswers): string | null {
  if (!TimeZone.safeParse(timeZone).success) return `“${timeZone}” is no time zone: give one such as America/Denver`;
  if (times.some(({ form, year }) => needsYear(form) && !(year !== null && year >= 1970 && year <= 2199)))
    return 'Give the year of the first row';
  if (times.some(({ shiftMinutes }) => !(Math.abs(shiftMinutes) <= MOST_SHIFT_MINUTES)))
    return 'A shift is at most two days (2,880 minutes)';
  return null;
}

const roleKey = ({ role, unitIndex }: ColumnAnswer): string => `${role ?? ''} ${unitIndex ?? ''}`;

/** How many columns have each role (of each unit): asked once for all rows of a long list. */
export function roleCounts(answers: readonly ColumnAnswer[]): ReadonlyMap<string, number> {
  const counts = new Map<string, number>();
  for (const answer of answers) counts.set(roleKey(answer), (counts.get(roleKey(answer)) ?? 0) + 1);
  return counts;
}

/** What happens to several columns of one role, in words; null for a role that one column has alone. */
export function clashWords(counts: ReadonlyMap<string, number>, answer: ColumnAnswer): string | null {
  const { role } = answer;
  if (role === null || role === IGNORE_ROLE) return null;
  const same = counts.get(roleKey(answer)) ?? 0;
  if (same < 2) return null;
  const { quantity } = pointRole(role);
  return `${same} columns have this role: ${quantity === 'flow' || quantity === 'power' ? 'added up' : 'averaged'}.`;
}

/** The points of other files that carry an answer's role already; null when there are none. */
export function carriedNames({ carried = [] }: Preview, { role, unitIndex }: ColumnAnswer): readonly string[] | null {
  if (role === null || role === IGNORE_ROLE) return null;
  const index = pointRole(role).indexed ? (unitIndex ?? 1) : 0;
  return carried.find((each) => each.role === role && each.unitIndex === index)?.names ?? null;
}

/** What a further point of a role does, in words. */
export function furtherWords(role: PointRoleName): string {
  const { quantity } = pointRole(role);
  return `a further one, ${quantity === 'flow' || quantity === 'power' ? 'added up' : 'averaged'}`;
}

/** The body of PUT /uploads/{id}/mapping; throws when a column is still open. */
export function mappingBody(preview: Preview, answers: MappingAnswers, remember: boolean): ConfirmMapping {
  const tables = preview.tables.map((table, index) => {
    const answer = answers.times[index];
    return { timestamp: answer === undefined ? table.timestamp : timestampPlan(table, answer) };
  });
  return {
    timestamp: tables[0]?.timestamp ?? preview.timestamp,
    tables,
    timeZone: answers.timeZone,
    remember,
    columns: answers.columns.map(({ column, role, unit, unitIndex, further = false }) => {
      if (role === null) throw new Error(`mappingBody: "${column}" has no role yet`);
      return { column, role, unit, unitIndex, ...(further ? { further } : {}) };
    }),
  };
}

const GROUPS: readonly { group: string; roles: readonly PointRoleName[] }[] = [
  { group: 'loop', roles: POINT_ROLE_NAMES.slice(0, POINT_ROLE_NAMES.indexOf('unitStatus')) },
  { group: 'per unit', roles: POINT_ROLE_NAMES.filter((name) => pointRole(name).indexed === 'unit') },
  {
    group: 'plant',
    roles: POINT_ROLE_NAMES.filter(
      (name, index) => pointRole(name).indexed === undefined && index > POINT_ROLE_NAMES.indexOf('unitStatus'),
    ),
  },
  { group: 'branches', roles: POINT_ROLE_NAMES.filter((name) => pointRole(name).indexed === 'branch') },
];

export const ROLE_OPTIONS: readonly { group: string; options: readonly { value: MappedRole; label: string }[] }[] = [
  { group: 'not a point of the plant', options: [{ value: IGNORE_ROLE, label: 'leave out' }] },
  ...GROUPS.map(({ group, roles }) => ({
    group,
    options: roles.map((role) => ({ value: role, label: POINT_ROLES[role].label })),
  })),
];

/** What a role is called in the lists. */
export const roleLabel = (role: MappedRole | null): string =>
  role === null ? '' : role === IGNORE_ROLE ? 'leave out' : POINT_ROLES[role].label;
