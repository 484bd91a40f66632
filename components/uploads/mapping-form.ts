import {
  IGNORE_ROLE,
  POINT_ROLES,
  POINT_ROLE_NAMES,
  pointRole,
  type MappedRole,
  type PointRoleName,
} from '@/lib/point-roles';
import type { ConfirmMapping, Preview } from '@/lib/schemas/upload';
import { TREND_UNITS, TREND_UNIT_IDS, type TrendUnitId } from '@/lib/units';

/** A guess under this is no suggestion: a person has to decide (the API's own bound). */
export const SURE_ENOUGH = 0.5;

/** One column's answer; role null = still to be decided. */
export interface ColumnAnswer {
  column: string;
  role: MappedRole | null;
  unit: TrendUnitId | null;
  unitIndex: number | null;
}

/** The answers a preview suggests; what it is unsure of is left open. */
export function suggestedAnswers(preview: Preview): ColumnAnswer[] {
  return preview.columns.map(({ column, role, unit, unitIndex, confidence }) => ({
    column,
    role: confidence < SURE_ENOUGH ? null : role,
    unit,
    unitIndex,
  }));
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

/** Columns that still lack a role or a unit. */
export const openColumns = (answers: readonly ColumnAnswer[]): ColumnAnswer[] =>
  answers.filter(({ role, unit }) => role === null || (role !== IGNORE_ROLE && unit === null));

/** What happens to several columns of one role, in words; null for a role that one column has alone. */
export function clashWords(answers: readonly ColumnAnswer[], answer: ColumnAnswer): string | null {
  const { role } = answer;
  if (role === null || role === IGNORE_ROLE) return null;
  const same = answers.filter((other) => other.role === role && other.unitIndex === answer.unitIndex);
  if (same.length < 2) return null;
  const { quantity } = pointRole(role);
  return `${same.length} columns have this role: ${quantity === 'flow' || quantity === 'power' ? 'added up' : 'averaged'}.`;
}

/** The body of PUT /uploads/{id}/mapping; throws when a column is still open. */
export function mappingBody(preview: Preview, answers: readonly ColumnAnswer[], remember: boolean): ConfirmMapping {
  return {
    timestamp: preview.timestamp,
    timeZone: preview.timeZone,
    remember,
    columns: answers.map(({ column, role, unit, unitIndex }) => {
      if (role === null) throw new Error(`mappingBody: "${column}" has no role yet`);
      return { column, role, unit, unitIndex };
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
