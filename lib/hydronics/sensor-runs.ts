import { within } from './sensor-activity';
import type { Tally } from './sensor-activity';
import type { SensorChannel } from './sensor-channels';
import { gapSlots } from './sensor-scan';

/** Below this share of design a flow stands at zero, which is no sign of a stuck meter. */
const ZERO_FLOW_SHARE = 0.02;
/** Steps between neighbouring values below this are fine: the channel shows small changes. */
const FINE_STEP_F = 0.3;
const MEDIUM_STEP_F = 0.75;
const FINE_FLOW_SHARE = 0.01;
/** Grids of coarse loggers: half degrees of either scale, whole tens of gpm. */
const COARSE_GRID_F = 0.5;
const COARSE_GRID_C_IN_F = 0.9;
const COARSE_GRID_GPM = 10;
/** Stored values are single precision. */
const GRID_TOLERANCE = 1e-3;

export const isZeroFlow = (channel: SensorChannel, value: number): boolean =>
  channel.quantity === 'flow' && Math.abs(value) <= ZERO_FLOW_SHARE * channel.designGpm;

/** Whether a coarse logger would show this value: then it may stand for hours without a fault. */
export function isOnCoarseGrid(channel: SensorChannel, value: number): boolean {
  const onGrid = (from: number, grid: number) => {
    const steps = (value - from) / grid;
    return Math.abs(steps - Math.round(steps)) * grid <= GRID_TOLERANCE;
  };
  if (channel.quantity === 'flow') return onGrid(0, COARSE_GRID_GPM);
  return onGrid(0, COARSE_GRID_F) || onGrid(32, COARSE_GRID_C_IN_F);
}

/** A channel's own runs of one value, laid out so that any stretch of the record is looked up at once. */
export interface OwnRuns {
  /** Slots that say something, counted up. */
  said: Tally;
  /** Run that each slot belongs to, and the slot where each run starts. */
  runOf: Int32Array;
  starts: Int32Array;
  /** Fine changes, and fine or medium ones, into the runs up to each run. */
  fine: Int32Array;
  medium: Int32Array;
  /** Squares of the runs' lengths: `squares[k]` is the sum over the runs before run k. */
  squares: Float64Array;
}

/** Zero flows say nothing; what stood before a long gap is not remembered, so that a verdict rests on its surroundings. */
export function ownRuns(channel: SensorChannel, stepMinutes: number): OwnRuns {
  const { values, lo, hi } = channel;
  const length = values.length;
  const gap = gapSlots(stepMinutes);
  const isFlow = channel.quantity === 'flow';
  const zero = isFlow ? ZERO_FLOW_SHARE * channel.designGpm : -1;
  const fineStep = isFlow ? FINE_FLOW_SHARE * channel.designGpm : FINE_STEP_F;
  const mediumStep = isFlow ? fineStep : MEDIUM_STEP_F;
  const [said, runOf, starts] = [new Int32Array(length + 1), new Int32Array(length), new Int32Array(length + 1)];
  const [fine, medium, squares] = [
    new Int32Array(length + 1),
    new Int32Array(length + 1),
    new Float64Array(length + 1),
  ];
  let run = 0;
  let value = Number.NaN;
  let last = -1;
  for (let slot = 0; slot < length; slot += 1) {
    const now = values[slot] as number;
    const counts = now >= lo && now <= hi && Math.abs(now) > zero;
    said[slot + 1] = (said[slot] as number) + (counts ? 1 : 0);
    if (counts && (now !== value || slot - last > gap)) {
      const runLength = within(said, starts[run] as number, slot);
      const step = Math.abs(now - value);
      run += 1;
      starts[run] = slot;
      squares[run] = (squares[run - 1] as number) + runLength * runLength;
      fine[run] = (fine[run - 1] as number) + (step < fineStep ? 1 : 0);
      medium[run] = (medium[run - 1] as number) + (step < mediumStep ? 1 : 0);
      value = now;
    }
    if (counts) last = slot;
    runOf[slot] = run;
  }
  return { said, runOf, starts, fine, medium, squares };
}

/** What the channel usually does in a stretch or two: sums over the runs in it, those at the ends cut off there. */
export interface UsualRuns {
  said: number;
  squares: number;
  changes: number;
  fine: number;
  medium: number;
}

/** Adds the stretch from..to to `sum`. */
export function addRuns(own: OwnRuns, from: number, to: number, sum: UsualRuns): void {
  if (to <= from) return;
  const said = within(own.said, from, to);
  const first = own.runOf[from] as number;
  const last = own.runOf[to - 1] as number;
  sum.said += said;
  if (first === last) {
    sum.squares += said * said;
    return;
  }
  const head = within(own.said, from, own.starts[first + 1] as number);
  const tail = within(own.said, own.starts[last] as number, to);
  sum.squares += head * head + (own.squares[last] as number) - (own.squares[first + 1] as number) + tail * tail;
  sum.changes += last - first;
  sum.fine += (own.fine[last] as number) - (own.fine[first] as number);
  sum.medium += (own.medium[last] as number) - (own.medium[first] as number);
}
