import type { PointRoleName } from '../point-roles';
import { offsetOfSteps, OFFSET_STEP_MINUTES, type ClockOffset } from './clock-offset';
import { stepsOf, type Steps } from './clock-steps';
import { PERSON_DECIDES, type Draft } from './roles/draft';

/** One table's clock that seems to be off against another's. */
export interface ClockDoubt {
  table: number;
  againstTable: number;
  /** By how much the clock of `table` is ahead; a plan's `shiftMinutes` of the same size with the other sign puts it right. */
  offsetMinutes: number;
  /** A sentence for a person. */
  message: string;
}

/** Roles that change together, step by step. */
const TOGETHER: readonly (readonly PointRoleName[])[] = [
  ['primarySupplyTemp', 'headerSupplyTemp', 'secondarySupplyTemp'],
  ['primaryReturnTemp', 'secondaryReturnTemp'],
  ['primaryFlow', 'unitStatus', 'unitFlow', 'unitPower', 'plantPower', 'primaryPumpStatus'],
  ['secondaryFlow', 'distributionPumpPower', 'distributionPumpSpeed', 'differentialPressure'],
  ['outdoorTemp'],
];
/** Roles of one unit that change together; of another unit they say nothing. */
const OF_UNIT: readonly PointRoleName[] = [
  'unitStatus',
  'unitPower',
  'unitFlow',
  'unitLoadPercent',
  'unitEvaporatorDp',
  'primaryPumpStatus',
  'primaryPumpSpeed',
];
/** Water and machines take some minutes themselves: between unlike roles a smaller offset is no doubt. */
const LEAST_UNLIKE_MINUTES = 30;
const MOST_PAIRS = 400;

/**
 * Tables whose clocks do not agree, by pairs of columns that should change together. Said only when no pair of the two
 * tables shows that they agree, and at the peak at least twice as many steps match as with the clocks as they are.
 *
 * Gaps  columns without times of their own, and those whose role a person has yet to decide, are left out.
 */
export function clockDoubts(drafts: readonly Draft[]): ClockDoubt[] {
  const timed = drafts.filter(
    ({ timesMs, role, confidence }) => timesMs !== null && role !== 'ignore' && confidence >= PERSON_DECIDES,
  );
  const steps = new Map<Draft, Steps>();
  const trainOf = (draft: Draft): Steps => {
    const before = steps.get(draft) ?? stepsOf({ timesMs: draft.timesMs!, values: draft.statistics.values });
    steps.set(draft, before);
    return before;
  };
  const counts = new Map<number, number>();
  for (const { table } of timed) counts.set(table, (counts.get(table) ?? 0) + 1);
  // The table with most points is the one that others are held against.
  const tables = [...counts].sort((a, b) => b[1] - a[1] || a[0] - b[0]).map(([table]) => table);
  const doubts: ClockDoubt[] = [];
  const off = new Set<number>();
  let pairs = 0;
  for (const [i, againstTable] of tables.entries()) {
    if (off.has(againstTable)) continue;
    for (const table of tables.slice(i + 1)) {
      if (off.has(table) || pairs > MOST_PAIRS) continue;
      const found: Found[] = [];
      for (const draft of timed.filter((each) => each.table === table)) {
        for (const other of timed.filter((each) => each.table === againstTable)) {
          if (pairs > MOST_PAIRS || !moveTogether(draft, other)) continue;
          pairs++;
          const offset = offsetOfSteps(trainOf(draft), trainOf(other));
          if (offset) found.push({ draft, other, ...offset });
        }
      }
      const doubt = weigh(found);
      if (!doubt) continue;
      off.add(table);
      doubts.push({ table, againstTable, offsetMinutes: doubt.offsetMinutes, message: messageOf(doubt) });
    }
  }
  return doubts;
}

interface Found extends ClockOffset {
  draft: Draft;
  other: Draft;
}

function moveTogether(a: Draft, b: Draft): boolean {
  const [first, second] = [a.role as PointRoleName, b.role as PointRoleName];
  if (a.unitIndex !== null && b.unitIndex !== null)
    return a.unitIndex === b.unitIndex && ((OF_UNIT.includes(first) && OF_UNIT.includes(second)) || first === second);
  return TOGETHER.some((roles) => roles.includes(first) && roles.includes(second));
}

/** The best of several pairs, when nearly all of them say the same and none says that the clocks agree. */
function weigh(found: readonly Found[]): Found | null {
  const clear = found.filter(({ correlation, atZero }) => atZero < correlation / 2);
  const best = [...clear].sort((a, b) => b.correlation - a.correlation)[0];
  if (!best || found.some(({ offsetMinutes }) => Math.abs(offsetMinutes - best.offsetMinutes) > OFFSET_STEP_MINUTES))
    return null;
  const least = best.draft.role === best.other.role ? OFFSET_STEP_MINUTES : LEAST_UNLIKE_MINUTES;
  return Math.abs(best.offsetMinutes) >= least ? best : null;
}

function messageOf({ draft, other, offsetMinutes, correlation, atZero }: Found): string {
  const size = Math.abs(offsetMinutes);
  const length = size % 60 === 0 ? `${size / 60} h` : `${size} min`;
  const when = offsetMinutes > 0 ? 'after' : 'before';
  const percent = (share: number) => `${Math.round(share * 100)} %`;
  return (
    `"${draft.column}" changes ${length} ${when} "${other.column}" (${percent(correlation)} of steps match so, ` +
    `${percent(atZero)} as the clocks stand): the two sources' clocks seem to be ${length} apart. ` +
    `If so, shift the times of "${draft.column}" and what came with it by ${offsetMinutes > 0 ? '-' : '+'}${length}.`
  );
}
