import type { PlantActivity, Tally } from './sensor-activity';
import { within } from './sensor-activity';
import type { SensorChannel } from './sensor-channels';

/** How far around a slot the verdict on it may look, so that a day's answer rests on the day and its neighbours. */
const AROUND_MINUTES = 12 * 60;
/** Least time on one value while the plant runs. */
const STUCK_MINUTES = 120;
/** Missing values this long end a run; shorter ones are passed over. */
const GAP_MINUTES = 60;
/**
 * A run must be this many times the run that one usually finds the channel in nearby. With a coarse resolution or increment
 * those are hours, so that only a value held far beyond them counts; with a fine one they are a slot or two.
 */
const USUAL_RUNS = 5;
/** Least record outside the run that tells what is usual for the channel. */
const USUAL_MINUTES = 60;
const USUAL_SLOTS = 6;
/** Share of the slots in which the rest of the plant must have moved within the hour. */
const MOVED_SHARE = 0.1;
const MOVED_CLEARLY_SHARE = 0.05;
/** Below this share of design a flow stands at zero, which is no sign of a stuck meter. */
const ZERO_FLOW_SHARE = 0.02;
/** Share of the running slots with heat carried over production that makes a flow of zero impossible. */
const LOADED_SHARE = 0.8;

/** A run of one value: slots fromSlot..toSlot (half-open), the ends not missing. */
export interface Run {
  fromSlot: number;
  toSlot: number;
}

/** Runs of exactly one value that last the least time; readings that cannot be are passed over like missing ones. */
export function longRuns(channel: SensorChannel, stepMinutes: number): Run[] {
  const { values, lo, hi } = channel;
  const least = Math.max(2, Math.ceil(STUCK_MINUTES / stepMinutes));
  const gap = Math.max(1, Math.floor(GAP_MINUTES / stepMinutes));
  const runs: Run[] = [];
  let from = 0;
  let last = -1;
  let value = Number.NaN;
  for (let slot = 0; slot < values.length; slot += 1) {
    const now = values[slot] as number;
    if (now === value && slot - last <= gap) {
      last = slot;
    } else if (now >= lo && now <= hi) {
      if (last + 1 - from >= least) runs.push({ fromSlot: from, toSlot: last + 1 });
      from = slot;
      last = slot;
      value = now;
    }
  }
  if (last + 1 - from >= least) runs.push({ fromSlot: from, toSlot: last + 1 });
  return runs;
}

const isZeroFlow = (channel: SensorChannel, value: number): boolean =>
  channel.quantity === 'flow' && Math.abs(value) <= ZERO_FLOW_SHARE * channel.designGpm;

/** Steps between neighbouring values below this are fine: the channel shows small changes. */
const FINE_STEP_F = 0.3;
const MEDIUM_STEP_F = 0.75;
const FINE_FLOW_SHARE = 0.01;
/** Share of a channel's steps that must be as small for it to count as that fine. */
const FINE_SHARE = 0.2;
/** What others must have moved by within the hour before a channel of medium or coarse steps has to follow, F. */
const MEDIUM_MOVE_F = 1.25;
const COARSE_MOVE_F = 2.5;

/**
 * Streams that a sensor's own stream is made of: when they move, it moves. The primary supply, the secondary return and the
 * common pipe are made of nothing measured here; for them both kinds of stream must have moved.
 */
const MADE_OF: Partial<Record<SensorChannel['name'], readonly SensorChannel['name'][]>> = {
  secondarySupplyF: ['primarySupplyF', 'unitLeavingF'],
  primaryReturnF: ['secondaryReturnF', 'unitEnteringF'],
  unitEnteringF: ['primaryReturnF', 'secondaryReturnF'],
};
const SUPPLIES = ['primarySupplyF', 'secondarySupplyF', 'unitLeavingF'] as const;
const RETURNS = ['primaryReturnF', 'secondaryReturnF', 'unitEnteringF'] as const;

/** The channel's own runs of one value, so that any stretch is looked up at once. */
interface OwnRuns {
  /** Slots that say something, counted up. */
  said: Tally;
  /** Run that each slot belongs to, and the slot where each run starts. */
  runOf: Int32Array;
  starts: number[];
  /** Changes from run to run that are fine, and fine or medium, counted up by run. */
  fine: number[];
  medium: number[];
  /** Squares of the runs' lengths, counted up: `squares[k]` is the sum over the runs before run k. */
  squares: number[];
}

function ownRuns(channel: SensorChannel, stepMinutes: number): OwnRuns {
  const { values, lo, hi } = channel;
  const n = values.length;
  const gap = Math.max(1, Math.floor(GAP_MINUTES / stepMinutes));
  const zero = channel.quantity === 'flow' ? ZERO_FLOW_SHARE * channel.designGpm : -1;
  const isFlow = channel.quantity === 'flow';
  const fineStep = isFlow ? FINE_FLOW_SHARE * channel.designGpm : FINE_STEP_F;
  const mediumStep = isFlow ? fineStep : MEDIUM_STEP_F;
  const [said, runOf, starts, fine, medium] = [new Int32Array(n + 1), new Int32Array(n), [0], [0], [0]];
  let value = Number.NaN;
  let last = -1;
  for (let slot = 0; slot < n; slot += 1) {
    const now = values[slot] as number;
    const counts = now >= lo && now <= hi && Math.abs(now) > zero;
    said[slot + 1] = (said[slot] as number) + (counts ? 1 : 0);
    // What stood before a long gap is not remembered: the verdict on a slot rests on its surroundings alone.
    if (counts && (now !== value || slot - last > gap)) {
      const step = Math.abs(now - value);
      fine.push((fine[starts.length - 1] as number) + (step < fineStep ? 1 : 0));
      medium.push((medium[starts.length - 1] as number) + (step < mediumStep ? 1 : 0));
      starts.push(slot);
      value = now;
    }
    if (counts) last = slot;
    runOf[slot] = starts.length - 1;
  }
  const squares = [0];
  starts.forEach((start, run) => {
    squares.push((squares[run] as number) + within(said, start, starts[run + 1] ?? n) ** 2);
  });
  return { said, runOf, starts, fine, medium, squares };
}

/** Sum of the squares of the lengths of the runs in from..to, those at the ends cut off there. */
function squaredRuns({ said, runOf, starts, squares }: OwnRuns, from: number, to: number): number {
  if (to <= from) return 0;
  const first = runOf[from] as number;
  const last = runOf[to - 1] as number;
  if (first === last) return within(said, from, to) ** 2;
  const inner = (squares[last] as number) - (squares[first + 1] as number);
  return within(said, from, starts[first + 1] as number) ** 2 + inner + within(said, starts[last] as number, to) ** 2;
}

/** Runs that start beside the judged one within the view, counted (`starts`) or looked up in a count by run. */
function changes({ runOf, starts }: OwnRuns, counts: readonly number[], view: View): number {
  const between = (from: number, to: number) => {
    if (to <= from) return 0;
    const [first, last] = [runOf[from] as number, runOf[to - 1] as number];
    return counts === starts ? last - first : (counts[last] as number) - (counts[first] as number);
  };
  return between(view.beforeFrom, view.from) + between(view.to, view.afterTo);
}

/** What a verdict on one slot looks at: the part of the run near it, and the record beside that part. */
interface View {
  from: number;
  to: number;
  beforeFrom: number;
  afterTo: number;
}

class StuckJudge {
  private readonly around: number;
  private readonly least: number;
  private readonly running: Tally;
  private own: OwnRuns | undefined;

  constructor(
    private readonly channel: SensorChannel,
    private readonly activity: PlantActivity,
    private readonly stepMinutes: number,
  ) {
    this.around = Math.round(AROUND_MINUTES / stepMinutes);
    this.least = Math.max(2, Math.ceil(STUCK_MINUTES / stepMinutes));
    this.running = activity.running(channel.unitIndex);
  }

  isStuck(run: Run, slot: number): boolean {
    const view: View = {
      from: Math.max(run.fromSlot, slot - this.around),
      to: Math.min(run.toSlot, slot + this.around + 1),
      beforeFrom: Math.max(0, slot - this.around),
      afterTo: Math.min(this.channel.values.length, slot + this.around + 1),
    };
    const runningSlots = within(this.running, view.from, view.to);
    if (runningSlots < this.least) return false;
    const value = this.channel.values[run.fromSlot] as number;
    if (isZeroFlow(this.channel, value)) return this.isDeadMeter(view, runningSlots);
    return this.beyondUsual(view, runningSlots) ?? this.contradicted(view, MEDIUM_MOVE_F);
  }

  /** A main that shows no flow while heat is carried over production. */
  private isDeadMeter(view: View, runningSlots: number): boolean {
    if (this.channel.place !== 'main') return false;
    return within(this.activity.loaded(), view.from, view.to) >= LOADED_SHARE * runningSlots;
  }

  /** Far beyond the channel's own usual run while the plant moved; undefined when the record nearby does not tell. */
  private beyondUsual(view: View, runningSlots: number): boolean | undefined {
    const own = (this.own ??= ownRuns(this.channel, this.stepMinutes));
    const saidSlots = within(own.said, view.beforeFrom, view.from) + within(own.said, view.to, view.afterTo);
    if (saidSlots < Math.max(USUAL_SLOTS, USUAL_MINUTES / this.stepMinutes)) return undefined;
    // The mean run met by a glance at any moment: long ones count by their length.
    const squared = squaredRuns(own, view.beforeFrom, view.from) + squaredRuns(own, view.to, view.afterTo);
    const usual = squared / saidSlots;
    if (runningSlots < USUAL_RUNS * usual) return false;
    const steps = changes(own, own.starts, view);
    if (changes(own, own.fine, view) >= FINE_SHARE * steps) {
      return this.movedMeanwhile(view, this.activity.moved(), MOVED_SHARE);
    }
    const isMedium = changes(own, own.medium, view) >= FINE_SHARE * steps;
    return this.contradicted(view, isMedium ? MEDIUM_MOVE_F : COARSE_MOVE_F);
  }

  /** Judged by what a sensor in that pipe would have had to follow. */
  private contradicted(view: View, limitF: number): boolean {
    // A pipe that came to rest and ran again did not keep its temperature, nor its flow.
    if (within(this.activity.resting(this.channel.unitIndex), view.from, view.to) >= this.least) return true;
    if (this.channel.quantity === 'flow') return false;
    const source = MADE_OF[this.channel.name];
    const streams = source && this.activity.has(source) ? [source] : [SUPPLIES, RETURNS];
    return streams.every((names) =>
      this.movedMeanwhile(view, this.activity.movedBy(names, limitF), MOVED_CLEARLY_SHARE),
    );
  }

  /** The channel itself stands still in the view, so that any movement there is another's. */
  private movedMeanwhile(view: View, moved: Tally, share: number): boolean {
    const from = Math.min(view.to, view.from + this.activity.hourSlots);
    const slots = view.to - from;
    return slots > 0 && within(moved, from, view.to) >= Math.max(1, share * slots);
  }
}

/**
 * Stretches in which the channel repeats one value although its pipe cannot have: for two hours at least while the plant runs,
 * far beyond the channel's own usual runs nearby, and while other sensors moved.
 *
 * Gaps    no verdict without a running plant; a flow of zero counts only for a main while heat is carried.
 * Source  common practice, no source (limits above).
 */
export function stuckStretches(channel: SensorChannel, activity: PlantActivity, stepMinutes: number): Run[] {
  const runs = longRuns(channel, stepMinutes);
  if (runs.length === 0) return [];
  const judge = new StuckJudge(channel, activity, stepMinutes);
  const stretches: Run[] = [];
  for (const run of runs) {
    let from = -1;
    for (let slot = run.fromSlot; slot <= run.toSlot; slot += 1) {
      const stuck = slot < run.toSlot && judge.isStuck(run, slot);
      if (stuck && from < 0) from = slot;
      if (!stuck && from >= 0) {
        stretches.push({ fromSlot: from, toSlot: slot });
        from = -1;
      }
    }
  }
  return stretches;
}
