import type { UnitModel } from './types';

/** Up to this many units every subset is looked at; with more, the largest are taken first. */
const MAX_ENUMERATED = 10;

/** What a set of production units can do together. */
export interface UnitSet {
  tons: number;
  minFlowGpm: number;
  designFlowGpm: number;
  maxFlowGpm: number;
  auxiliaryKw: number;
  units: number;
}

function setOf(units: readonly UnitModel[]): UnitSet {
  const set: UnitSet = { tons: 0, minFlowGpm: 0, designFlowGpm: 0, maxFlowGpm: 0, auxiliaryKw: 0, units: units.length };
  for (const unit of units) {
    set.tons += unit.tons;
    set.minFlowGpm += unit.minFlowGpm;
    set.designFlowGpm += unit.flowGpm;
    set.maxFlowGpm += unit.maxFlowGpm;
    set.auxiliaryKw += unit.auxiliaryKw;
  }
  return set;
}

/**
 * Every set that can be kept running of the given units, from the smallest rated tons to all of them; at least one unit.
 *
 * Shapes  up to 10 units: all subsets; more: the largest first, one more at a time.
 * Gaps    no units: an empty list.
 */
export function unitSets(units: readonly UnitModel[]): UnitSet[] {
  const sets: UnitSet[] = [];
  if (units.length <= MAX_ENUMERATED) {
    for (let mask = 1; mask < 1 << units.length; mask += 1) {
      sets.push(setOf(units.filter((_, index) => (mask >> index) & 1)));
    }
  } else {
    const byTons = [...units].sort((a, b) => b.tons - a.tons);
    for (let count = 1; count <= byTons.length; count += 1) sets.push(setOf(byTons.slice(0, count)));
  }
  return sets.sort((a, b) => a.tons - b.tons || a.units - b.units);
}

/** What flow a set can pass: its units' limits when the pumps follow, the pumps' own flow when they do not. */
export const flowCapacityGpm = (set: UnitSet, speed: 'constant' | 'variable'): number =>
  speed === 'variable' ? set.maxFlowGpm : set.designFlowGpm;

/**
 * The smallest set by rated tons that carries a load and passes a flow; all units when none does.
 *
 * Units   tons, gpm. Gaps: no sets: undefined; a NaN flow is not asked for.
 */
export function smallestSet(
  sets: readonly UnitSet[],
  loadTons: number,
  flowGpm: number,
  speed: 'constant' | 'variable',
): UnitSet | undefined {
  const found = sets.find((set) => set.tons >= loadTons && !(flowCapacityGpm(set, speed) < flowGpm));
  return found ?? sets.at(-1);
}

/** Production flow that a set makes while the distribution side takes `flowGpm`. */
export const productionFlowGpm = (set: UnitSet, flowGpm: number, speed: 'constant' | 'variable'): number =>
  speed === 'variable' ? Math.max(set.minFlowGpm, flowGpm) : set.designFlowGpm;
