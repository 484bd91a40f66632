import { POINT_ROLES, pointRole, type PointRoleName } from '../../point-roles';
import { TREND_UNITS, type TrendUnitId } from '../../units';
import type { PreviewOptions } from '../types';
import { unitOfCell, unitOfHeading } from '../unit-text';
import { roleByName, unitIndexes, type NamedRole } from './by-name';
import { roleByValues } from './by-values';
import { weighTogether } from './context';
import { doubt, JUST_OPEN, says, type Draft } from './draft';
import { NUMBERED, piecesOf, readName, sharedPrefix } from './names';
import { checkUnit, checkWater, OPEN_UNIT_CONFIDENCE, quantityOf, unitByValues } from './quantity';
import { refusal } from './refusals';
import type { ColumnStatistics } from './statistics';

/** One column to find a role for. */
export interface Candidate {
  column: string;
  /** Cell of the unit row, if there is one. */
  unitCell: string;
  statistics: ColumnStatistics;
  /** One instant a value, so that columns of different tables, or points of a long file, can be compared. */
  timesMs?: Float64Array;
  /** Columns of one table without times share rows. */
  table?: number;
}

const UNIT_NAMED = 0.04;
const UNIT_BY_VALUES = 0.01;
const SOME_WORDS_MISSING = 0.03;

/**
 * Role, unit and unit index for each column, by name, unit and values, then by comparing the columns with each other.
 * Confidence under 0.5 leaves the decision to a person; the clauses of the reason are in the drafts (see sentenceOf).
 *
 * Source  common practice of the trade in naming and behaviour of points; no source for the weights.
 */
export function suggestRoles(candidates: readonly Candidate[], options: PreviewOptions): Draft[] {
  const drafts = startDrafts(candidates);
  for (const draft of drafts) draft.quantity = quantityOf(draft);
  const hint = usualTemperatureUnit(drafts);
  // Without any named unit the water temperatures go first; all else follows them.
  const water = drafts.filter((draft) => draft.quantity === 'temperature' && !says(draft, 'outdoor', 'wetBulb'));
  for (const draft of water) unitByValues(draft, hint, options);
  const found = usualTemperatureUnit(drafts);
  for (const draft of drafts) unitByValues(draft, found, options);

  const indexes = unitIndexes(drafts, options);
  for (const draft of drafts) decide(draft, indexes.get(draft) ?? null, options);
  for (const draft of drafts) if (draft.confidence === 0) roleByValues(draft, drafts, options);
  weighTogether(drafts, options);
  for (const draft of drafts) {
    if (draft.unitOpen && draft.role !== 'ignore') draft.confidence = Math.min(draft.confidence, OPEN_UNIT_CONFIDENCE);
  }
  return drafts;
}

function startDrafts(candidates: readonly Candidate[]): Draft[] {
  const headings = candidates.map(({ column }) => unitOfHeading(column));
  const pieces = headings.map(({ name }) => piecesOf(name));
  const prefix = sharedPrefix(pieces);
  return candidates.map(({ column, unitCell, statistics, timesMs, table }, i) => {
    const heading = headings[i]!;
    const rowUnit = unitOfCell(unitCell);
    const unit = heading.unit ?? rowUnit;
    const clause = heading.unit
      ? `unit "${heading.text}" from the heading`
      : rowUnit
        ? `unit "${unitCell.trim()}" from the unit row`
        : '';
    return {
      column,
      name: readName(pieces[i]!.slice(prefix)),
      heading,
      statistics,
      timesMs: timesMs ?? null,
      table: table ?? 0,
      quantity: null,
      unit,
      unitGiven: unit,
      unitFrom: unit ? 'named' : 'open',
      role: 'ignore',
      unitIndex: null,
      confidence: 0,
      unitOpen: false,
      shown: [],
      said: [],
      unitClause: clause,
    };
  });
}

/** The unit most temperatures of the file are known to be in. */
function usualTemperatureUnit(drafts: readonly Draft[]): TrendUnitId | null {
  const counts = new Map<TrendUnitId, number>();
  for (const { unit } of drafts) {
    if (unit && TREND_UNITS[unit].quantity === 'temperature') counts.set(unit, (counts.get(unit) ?? 0) + 1);
  }
  return [...counts].sort((a, b) => b[1] - a[1])[0]?.[0] ?? null;
}

function decide(draft: Draft, unitIndex: number | null, options: PreviewOptions): void {
  const refused = refusal(draft);
  if (refused) return leaveOut(draft, refused.confidence, refused.reason);
  const named = roleByName(draft, options);
  if (!named) return;
  draft.said = piecesSaying(draft, named);
  if (named.note) draft.shown.push(named.note);
  if (named.role === 'ignore') {
    draft.confidence = named.confidence;
    draft.unit = null;
    draft.unitClause = '';
    return;
  }
  draft.role = named.role;
  draft.confidence = named.confidence;
  matchUnit(draft, named.role);
  placeUnit(draft, named.role, unitIndex, options);
}

function leaveOut(draft: Draft, confidence: number, reason: string): void {
  Object.assign(draft, { role: 'ignore', unit: null, unitClause: '', confidence, shown: [reason], said: [] });
}

function piecesSaying(draft: Draft, named: NamedRole): string[] {
  const { says, setpointOrPump, index } = draft.name;
  const pieces = named.concepts.flatMap((concept) => {
    const piece = says.get(concept);
    if (piece === undefined) return [];
    return index !== null && NUMBERED.includes(concept) ? `${piece} ${index}` : piece;
  });
  return [...new Set(setpointOrPump ? [...pieces, setpointOrPump] : pieces)];
}

/** A unit of the role's quantity bears the role out; an open or impossible one needs a person. */
function matchUnit(draft: Draft, role: PointRoleName): void {
  const { quantity } = pointRole(role);
  if (draft.unit && TREND_UNITS[draft.unit].quantity !== quantity) {
    doubt(draft, JUST_OPEN, `the unit ${TREND_UNITS[draft.unit].label} is not one of a ${POINT_ROLES[role].label}`);
    return;
  }
  if (draft.unitFrom === 'named') draft.confidence += UNIT_NAMED;
  if (draft.unitFrom === 'values') draft.confidence += UNIT_BY_VALUES;
  if (draft.unitFrom === 'open') draft.unitOpen = true;
  const impossible = checkUnit(draft);
  if (impossible) doubt(draft, JUST_OPEN, impossible);
  const ice = quantity === 'temperature' && !role.startsWith('outdoor') ? checkWater(draft) : null;
  if (ice && !impossible) doubt(draft, JUST_OPEN, ice);
  if (draft.heading.text !== '' && draft.heading.unit === null)
    doubt(draft, JUST_OPEN, `the unit "${draft.heading.text}" is not known; choose one`);
  if (draft.statistics.words > 0) draft.confidence -= SOME_WORDS_MISSING;
  if (quantity === 'status' && draft.statistics.binary) {
    const { low, high } = draft.statistics;
    draft.shown.unshift(low === high ? `Only ${low} so far` : '0 and 1 only');
  }
}

function placeUnit(draft: Draft, role: PointRoleName, unitIndex: number | null, options: PreviewOptions): void {
  const { indexed } = pointRole(role);
  if (!indexed) return;
  draft.unitIndex = unitIndex;
  if (indexed === 'branch') return;
  const oneAndLoose = options.unitCount === 1 && draft.name.index === null;
  if (unitIndex === null || unitIndex < 1 || oneAndLoose) {
    draft.unitIndex = options.unitCount === 1 ? 1 : null;
    if (options.unitCount > 1) doubt(draft, JUST_OPEN, 'no unit number in the name: choose the unit');
  } else if (unitIndex > options.unitCount) {
    const units = options.unitCount === 1 ? 'one unit' : `${options.unitCount} units`;
    doubt(draft, JUST_OPEN, `number ${draft.name.index} where the plant has ${units}`);
  }
}

/** The reason as one sentence: what the values show, what the name says, where the unit comes from. */
export function sentenceOf(draft: Draft): string {
  const said = draft.said.length === 0 ? [] : [`name holds ${listed(draft.said.map((piece) => `"${piece}"`))}`];
  const clauses = [...draft.shown, ...said, ...(draft.unitClause ? [draft.unitClause] : [])];
  // Clauses are written to stand first; behind another they go on in small letters.
  const joined = clauses
    .map((clause, i) => (i > 0 && /^[A-Z][a-z]+ /.test(clause) ? lowered(clause) : clause))
    .join('; ');
  const text = clauses.length === 0 ? 'Neither name nor values tell what this is' : joined;
  return `${text[0]!.toUpperCase()}${text.slice(1)}${text.endsWith('?') ? '' : '.'}`;
}

const lowered = (text: string): string => `${text[0]!.toLowerCase()}${text.slice(1)}`;

const listed = (items: readonly string[]): string =>
  items.length < 2 ? items.join('') : `${items.slice(0, -1).join(', ')} and ${items.at(-1)}`;
