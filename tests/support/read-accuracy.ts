/** A measure as the bench prints it, with the goal that stands beside it. */
export interface PrintedMeasure {
  value: number;
  atLeast?: number;
  atMost?: number;
}

export interface PrintedGroup {
  plants: number;
  intervals: number;
  /** By the bench's own words. */
  measures: Record<string, PrintedMeasure>;
}

/** One run of the accuracy bench. */
export interface PrintedRun {
  groups: Record<string, PrintedGroup>;
  /** By plant's name, then by the column's head; a measure that a plant does not have is left out. */
  plants: Record<string, Record<string, number>>;
}

const GROUP = /^([a-z][a-z -]*): (\d+) plants, (\d+) running intervals$/;
/** A measure that is set in further belongs to the one above it. */
const MEASURE = /^ {2}[ *] ( *)(\S.*?) {2,}(-?\d+\.\d+) *(.*)$/;
const PLANT_NAME_WIDTH = 34;

/** Reads what the accuracy bench prints. Throws when it holds no group: then the bench prints something else by now. */
export function readAccuracy(printed: string): PrintedRun {
  const run: PrintedRun = { groups: {}, plants: {} };
  let group: PrintedGroup | undefined;
  let heads: string[] | undefined;
  let above = '';
  for (const line of printed.split('\n')) {
    const [, title, plants, intervals] = GROUP.exec(line) ?? [];
    if (title !== undefined) {
      group = { plants: Number(plants), intervals: Number(intervals), measures: {} };
      run.groups[title] = group;
      heads = undefined;
    } else if (line.startsWith('plant ')) {
      // Heads of two words stand in columns of their own width.
      heads = line.slice(PLANT_NAME_WIDTH).trim().split(/ {2,}/);
    } else if (heads) readPlant(line, heads, run);
    else if (group) above = readMeasure(line, group, above);
  }
  if (Object.keys(run.groups).length === 0) throw new Error('readAccuracy: no group in what was printed');
  return run;
}

function readPlant(line: string, heads: readonly string[], run: PrintedRun): void {
  const name = line.slice(0, PLANT_NAME_WIDTH).trim();
  if (name === '') return;
  const values = line.slice(PLANT_NAME_WIDTH).trim().split(/ +/);
  const told = heads.map((head, index) => [head, Number(values[index])] as const);
  run.plants[name] = Object.fromEntries(told.filter(([, value]) => Number.isFinite(value)));
}

/** Reads one measure; returns the one that further ones may belong to. */
function readMeasure(line: string, group: PrintedGroup, above: string): string {
  const [, inset = '', label, value, goal = ''] = MEASURE.exec(line) ?? [];
  if (label === undefined) return above;
  const bound = (sign: string) => new RegExp(`${sign} (\\d[\\d.]*)`).exec(goal)?.[1];
  const [least, most] = [bound('>='), bound('<=')];
  group.measures[inset === '' ? label : `${above}: ${label}`] = {
    value: Number(value),
    ...(least === undefined ? {} : { atLeast: Number(least) }),
    ...(most === undefined ? {} : { atMost: Number(most) }),
  };
  return inset === '' ? label : above;
}
