import type { MappedRole } from '../../point-roles';
import type { Quantity, TrendUnitId } from '../../units';
import type { HeadingUnit } from '../unit-text';
import type { NameReading } from './names';
import type { ColumnStatistics } from './statistics';
import type { Concept } from './vocabulary';

/** A column on its way to a suggestion. */
export interface Draft {
  /** The column's name as people see it. */
  column: string;
  name: NameReading;
  heading: HeadingUnit;
  statistics: ColumnStatistics;
  /** One instant a value, where the column has its own. */
  timesMs: Float64Array | null;
  /** Number of the table it stands in: columns without times of their own share rows within one table. */
  table: number;
  quantity: Quantity | null;
  unit: TrendUnitId | null;
  /** The unit as heading or unit row name it, kept while `unit` is not. */
  unitGiven: TrendUnitId | null;
  /** How sure the unit is: named somewhere, fitting the values, or open. */
  unitFrom: 'named' | 'values' | 'open';
  role: MappedRole;
  unitIndex: number | null;
  confidence: number;
  /** The role is clear but its unit is not: a person decides, unless comparing columns settles the unit. */
  unitOpen: boolean;
  /** Clauses of the reason: what the values show, what the name says, where the unit comes from. */
  shown: string[];
  said: string[];
  unitClause: string;
}

/** Confidence under which a person has to decide. */
export const PERSON_DECIDES = 0.5;
/** The highest confidence that still leaves the decision to a person. */
export const JUST_OPEN = 0.44;

export const says = (draft: Draft, ...concepts: readonly Concept[]): boolean =>
  concepts.some((concept) => draft.name.says.has(concept));

/** A role is borne out by behaviour by this much. */
const BORNE_OUT = 0.03;

/** What the values show in favour of a role. What a person has to decide stays so. */
export function bearOut(draft: Draft, clause: string): void {
  draft.shown.unshift(clause);
  if (draft.confidence >= PERSON_DECIDES) draft.confidence = Math.min(0.97, draft.confidence + BORNE_OUT);
}

/** Brings a confidence down to `most`. */
export function doubt(draft: Draft, most: number, clause: string): void {
  draft.confidence = Math.min(draft.confidence, most);
  draft.shown.push(clause);
}
