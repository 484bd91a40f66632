import type { PointRoleName } from '../../point-roles';
import { bearOut, doubt, JUST_OPEN, PERSON_DECIDES, type Draft } from './draft';
import { alignedTo, correlationOf, FEWEST_ROWS, medianOf, stored } from './pairing';
import { number } from './quantity';
import type { PreviewOptions } from '../types';

/** Return warmer than supply by less than this tells nothing. */
const CLEARLY_F = 0.3;
const CROSSED_F = 0.5;
/** Leaving water this near to a set-point is held at it. */
const HELD_F = 1.5;
/** Idle water this much warmer than running water is the machine room's. */
const IDLE_F = 3;
/** A machine that stands still takes and passes less than this share of what it does when it runs. */
const IDLE_SHARE = 0.15;
const MOVES_WITH = 0.7;

/** All that is known of one production unit. */
export interface UnitPoints {
  index: number;
  find: (role: PointRoleName) => Draft | undefined;
}

export function unitsOf(drafts: readonly Draft[]): UnitPoints[] {
  const byIndex = new Map<number, Draft[]>();
  for (const draft of drafts) {
    if (draft.unitIndex === null || !draft.role.startsWith('unit')) continue;
    byIndex.set(draft.unitIndex, [...(byIndex.get(draft.unitIndex) ?? []), draft]);
  }
  return [...byIndex].map(([index, points]) => ({
    index,
    // The surest of several.
    find: (role) => points.filter((each) => each.role === role).sort((a, b) => b.confidence - a.confidence)[0],
  }));
}

/** Whether the unit runs in each row of `at` (1 or 0, NaN unknown), and by which column that is known. */
export function runningAt(unit: UnitPoints, at: Draft): { running: Float64Array; by: Draft } | null {
  const signs: readonly (readonly [role: PointRoleName, share: number])[] = [
    ['unitStatus', 0.5],
    ['unitLoadPercent', 0.05],
    ['unitPower', 0.15],
    ['unitFlow', 0.25],
  ];
  for (const [role, share] of signs) {
    const by = unit.find(role);
    if (!by || by === at || by.confidence < PERSON_DECIDES) continue;
    const values = alignedTo(at, by);
    if (!values) continue;
    const limit = share * (role === 'unitStatus' ? 1 : Math.max(by.statistics.p95, 0));
    if (!(limit > 0)) continue;
    return { by, running: values.map((value) => (Number.isNaN(value) ? value : value > limit ? 1 : 0)) };
  }
  return null;
}

/** Values of a column where `mask` is `state`. */
export function whereState(values: Float64Array, mask: Float64Array, state: 0 | 1): Float64Array {
  return values.filter((value, i) => mask[i] === state && !Number.isNaN(value));
}

/** Checks each unit's points against each other: what moves, stops and warms together. */
export function weighUnits(drafts: readonly Draft[], options: PreviewOptions): void {
  for (const unit of unitsOf(drafts)) {
    const [leaving, entering] = [unit.find('unitLeavingTemp'), unit.find('unitEnteringTemp')];
    if (leaving && entering) weighEnds(unit, leaving, entering);
    if (leaving) weighSetpoint(unit, leaving, drafts, options);
    for (const role of ['unitPower', 'unitFlow', 'unitEvaporatorDp', 'unitLoadPercent'] as const) {
      const draft = unit.find(role);
      if (draft) stopsWithStatus(unit, draft);
    }
    const [load, power] = [unit.find('unitLoadPercent'), unit.find('unitPower')];
    if (load && power) moveTogether(load, power);
  }
}

function weighEnds(unit: UnitPoints, leaving: Draft, entering: Draft): void {
  const other = alignedTo(leaving, entering);
  if (!other) return;
  const known = runningAt(unit, leaving);
  const differences = leaving.statistics.values.map((value, i) => stored(entering, other[i]!) - stored(leaving, value));
  const counted = known ? whereState(differences, known.running, 1) : differences.filter((each) => !Number.isNaN(each));
  if (counted.length < FEWEST_ROWS) return;
  const warmer = counted.filter((each) => each > CLEARLY_F).length / counted.length;
  const middle = medianOf(counted);
  const when = known ? ' while it runs' : '';
  if (middle < -CROSSED_F) {
    doubt(leaving, JUST_OPEN, `Named leaving but warmer than "${entering.column}"${when}: exchanged?`);
    doubt(entering, JUST_OPEN, `Named entering but colder than "${leaving.column}"${when}: exchanged?`);
  } else if (warmer > 0.7) {
    const share = `in ${Math.round(warmer * 100)} % of rows${when}`;
    bearOut(entering, `Warmer than "${leaving.column}" ${share}`);
    bearOut(leaving, `Colder than "${entering.column}" ${share}`);
  }
}

function weighSetpoint(unit: UnitPoints, leaving: Draft, drafts: readonly Draft[], options: PreviewOptions): void {
  const known = runningAt(unit, leaving);
  if (!known) return;
  const { values } = leaving.statistics;
  const on = whereState(values, known.running, 1);
  const off = whereState(values, known.running, 0);
  if (on.length < FEWEST_ROWS) return;
  const onF = stored(leaving, medianOf(on));
  const named = unit.find('unitSetpoint') ?? drafts.find(({ role }) => role === 'supplySetpoint');
  const setpointF = named ? stored(named, named.statistics.median) : options.productionSupplyF;
  const idle =
    off.length >= FEWEST_ROWS && stored(leaving, medianOf(off)) - onF > IDLE_F
      ? `at ${number(medianOf(off))} while it stands, which is no supply water`
      : '';
  const held =
    setpointF !== undefined && Math.abs(onF - setpointF) < HELD_F
      ? `Near the set-point at ${number(medianOf(on))} while "${known.by.column}" runs`
      : '';
  const clause = [held, idle].filter(Boolean).join(', ');
  if (clause) bearOut(leaving, clause);
}

function stopsWithStatus(unit: UnitPoints, draft: Draft): void {
  const status = unit.find('unitStatus');
  if (!status || status.confidence < PERSON_DECIDES) return;
  const states = alignedTo(draft, status);
  if (!states) return;
  const on = whereState(draft.statistics.values, states, 1);
  const off = whereState(draft.statistics.values, states, 0);
  if (on.length < FEWEST_ROWS || off.length < FEWEST_ROWS) return;
  const [runs, stands] = [medianOf(on), medianOf(off)];
  if (runs > 0 && Math.abs(stands) < runs * IDLE_SHARE)
    bearOut(draft, `About ${number(stands)} while "${status.column}" is off, ${number(runs)} while it is on`);
  else if (runs <= stands)
    doubt(draft, JUST_OPEN, `No higher while "${status.column}" is on than while it is off: of another unit?`);
}

function moveTogether(load: Draft, power: Draft): void {
  const values = alignedTo(load, power);
  if (!values) return;
  const together = correlationOf(load.statistics.values, values);
  if (together > MOVES_WITH) bearOut(load, `Moves with "${power.column}" (correlation ${together.toFixed(2)})`);
}

/**
 * A "header" that warms up whenever one unit stands while others run is that unit's own sensor: in its place the water
 * of an idle machine would stand for the plant's supply.
 */
export function findIdleHeaders(drafts: readonly Draft[]): void {
  const units = unitsOf(drafts);
  if (units.length < 2) return;
  const headers: readonly string[] = ['primarySupplyTemp', 'headerSupplyTemp', 'secondarySupplyTemp'];
  for (const draft of drafts.filter(({ role }) => headers.includes(role))) {
    const masks = units.flatMap((unit) => {
      const known = runningAt(unit, draft);
      return known ? [{ unit, ...known }] : [];
    });
    for (const { unit, running, by } of masks) {
      const alone = running.map((state, i) =>
        state === 0 && !masks.some((other) => other.unit !== unit && other.running[i] === 1) ? Number.NaN : state,
      );
      const on = whereState(draft.statistics.values, alone, 1);
      const off = whereState(draft.statistics.values, alone, 0);
      if (on.length < FEWEST_ROWS || off.length < FEWEST_ROWS / 2) continue;
      if (stored(draft, medianOf(off)) - stored(draft, medianOf(on)) < IDLE_F) continue;
      draft.role = 'unitLeavingTemp';
      draft.unitIndex = unit.index;
      const values = `${number(medianOf(off))} while "${by.column}" shows that unit ${unit.index} stands and others run`;
      doubt(draft, JUST_OPEN, `${values}: the unit’s own water, not the header’s`);
      break;
    }
  }
}
