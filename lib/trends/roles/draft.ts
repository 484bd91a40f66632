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
  quantity: Quantity | null;
  unit: TrendUnitId | null;
  /** How sure the unit is: named somewhere, fitting the values, or open. */
  unitFrom: 'named' | 'values' | 'open';
  role: MappedRole;
  unitIndex: number | null;
  confidence: number;
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

/** Brings a confidence down to `most`. */
export function doubt(draft: Draft, most: number, clause: string): void {
  draft.confidence = Math.min(draft.confidence, most);
  draft.shown.push(clause);
}
