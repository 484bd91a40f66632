import type { PlantActivity, Tally } from './sensor-activity';
import { within } from './sensor-activity';
import type { SensorChannel } from './sensor-channels';
import { addRuns, isOnCoarseGrid, isZeroFlow, ownRuns } from './sensor-runs';
import type { OwnRuns, UsualRuns } from './sensor-runs';
import type { Run } from './sensor-scan';

/** How far around a slot the verdict on it may look, so that a day's answer rests on the day and its neighbours. */
const AROUND_MINUTES = 12 * 60;
/** One verdict for each of these, counted from the start of the record (which starts a day). */
const VERDICT_MINUTES = 15;
/** Least time on one value while the plant runs; where nothing but that value is seen, nearly the whole of 24 hours. */
const STUCK_MINUTES = 120;
/** A coarse step makes equal neighbours likelier than time does. */
const STUCK_SLOTS = 10;
const WHOLE_DAY_MINUTES = 20 * 60;
const WHOLE_DAY_RUNNING_MINUTES = 480;
/**
 * A run must be this many times the run that one usually finds the channel in nearby. With a coarse resolution or increment
 * those are hours, so that only a value held far beyond them counts; with a fine one they are a slot or two.
 */
const USUAL_RUNS = 5;
/** Least record outside the run that tells what is usual for the channel. */
const USUAL_MINUTES = 60;
const USUAL_SLOTS = 6;
const USUAL_CHANGES = 3;
/** Share of the slots in which the rest of the plant must have moved within the hour. */
const MOVED_SHARE = 0.1;
const MOVED_CLEARLY_SHARE = 0.05;
/** Share of the running slots with heat carried over production that makes a flow of zero impossible. */
const LOADED_SHARE = 0.8;
/** Share of a channel's steps that must be as small for it to count as that fine. */
const FINE_SHARE = 0.2;
/** What others must have moved by within the hour before a channel of medium or coarse steps has to follow, F. */
const MEDIUM_MOVE_F = 1.25;
const COARSE_MOVE_F = 2.5;

/**
 * Streams that a sensor's own stream is made of: when they move, it moves. The primary supply, the secondary return and the
 * common pipe are made of nothing measured here.
 */
const MADE_OF: Partial<Record<SensorChannel['name'], readonly SensorChannel['name'][]>> = {
  secondarySupplyF: ['primarySupplyF', 'unitLeavingF'],
  primaryReturnF: ['secondaryReturnF', 'unitEnteringF'],
  unitEnteringF: ['primaryReturnF', 'secondaryReturnF'],
};

/** What a verdict on one slot looks at: the part of the run near it, and the record beside that part. */
interface View {
  from: number;
  to: number;
  beforeFrom: number;
  afterTo: number;
  /** Slots of that part in which the sensor's pipe runs. */
  runningSlots: number;
}

export const leastHeldSlots = (stepMinutes: number): number =>
  Math.max(STUCK_SLOTS, Math.ceil(STUCK_MINUTES / stepMinutes));

/** Judges a channel's slots that lie in a run of one value. */
class StuckJudge {
  private readonly leastSlots: number;
  private readonly around: number;
  private readonly running: Tally;
  private own: OwnRuns | undefined;

  constructor(
    private readonly channel: SensorChannel,
    private readonly activity: PlantActivity,
    private readonly stepMinutes: number,
    private readonly steadyFlow: boolean,
  ) {
    this.around = Math.round(AROUND_MINUTES / stepMinutes);
    this.leastSlots = leastHeldSlots(stepMinutes);
    this.running = activity.running(channel.unitIndex);
  }

  isStuck(run: Run, slot: number): boolean {
    const beforeFrom = Math.max(0, slot - this.around);
    const afterTo = Math.min(this.channel.values.length, slot + this.around + 1);
    const from = Math.max(run.fromSlot, beforeFrom);
    const to = Math.min(run.toSlot, afterTo);
    const runningSlots = within(this.running, from, to);
    if (runningSlots < this.leastSlots) return false;
    const view: View = { from, to, beforeFrom, afterTo, runningSlots };
    const value = this.channel.values[run.fromSlot] as number;
    if (isZeroFlow(this.channel, value)) return this.isDeadMeter(view);
    return this.beyondUsual(view) ?? this.heldAllDay(view, value);
  }

  /** A main that shows no flow while heat is carried over production. */
  private isDeadMeter(view: View): boolean {
    if (this.channel.place !== 'main') return false;
    return within(this.activity.loaded(), view.from, view.to) >= LOADED_SHARE * view.runningSlots;
  }

  /** Far beyond the channel's own usual run while the plant moved; undefined when the record nearby does not tell. */
  private beyondUsual(view: View): boolean | undefined {
    const own = (this.own ??= ownRuns(this.channel, this.stepMinutes));
    const beside: UsualRuns = { said: 0, squares: 0, changes: 0, fine: 0, medium: 0 };
    addRuns(own, view.beforeFrom, view.from, beside);
    addRuns(own, view.to, view.afterTo, beside);
    if (beside.said < Math.max(USUAL_SLOTS, USUAL_MINUTES / this.stepMinutes)) return undefined;
    if (beside.changes < USUAL_CHANGES) return undefined;
    // The mean run met by a glance at any moment: long ones count by their length.
    if (view.runningSlots < (USUAL_RUNS * beside.squares) / beside.said) return false;
    if (beside.fine >= FINE_SHARE * beside.changes)
      return this.movedMeanwhile(view, this.activity.moved(), MOVED_SHARE);
    // Steps too coarse to show the noise: only what the channel must have followed speaks against it.
    return this.restarted(view) || this.unfollowed(view, beside.medium >= FINE_SHARE * beside.changes);
  }

  /** Nothing but this one value for a day. At the record's ends, where less is seen, nothing is said. */
  private heldAllDay(view: View, value: number): boolean {
    if ((view.to - view.from) * this.stepMinutes < WHOLE_DAY_MINUTES) return false;
    if (this.restarted(view) || this.unfollowed(view, true)) return true;
    // A pump of constant speed may give its one flow all day, a coarse logger its one value.
    if (this.steadyFlow || isOnCoarseGrid(this.channel, value)) return false;
    if (view.runningSlots * this.stepMinutes < WHOLE_DAY_RUNNING_MINUTES) return false;
    return this.movedMeanwhile(view, this.activity.moved(), MOVED_SHARE);
  }

  /** A pipe that came to rest and ran again did not keep its temperature, nor its flow. */
  private restarted(view: View): boolean {
    const restingSlots = within(this.activity.resting(this.channel.unitIndex), view.from, view.to);
    return restingSlots * this.stepMinutes >= STUCK_MINUTES;
  }

  /** The streams that the sensor's own is made of moved by more than its steps hide. */
  private unfollowed(view: View, hasMediumSteps: boolean): boolean {
    const streams = MADE_OF[this.channel.name];
    if (!streams) return false;
    const moved = this.activity.movedBy(streams, hasMediumSteps ? MEDIUM_MOVE_F : COARSE_MOVE_F);
    return this.movedMeanwhile(view, moved, MOVED_CLEARLY_SHARE);
  }

  /** The channel itself stands still in the view, so that any movement there is another's. */
  private movedMeanwhile(view: View, moved: Tally, share: number): boolean {
    const from = Math.min(view.to, view.from + this.activity.hourSlots);
    const slots = view.to - from;
    return slots > 0 && within(moved, from, view.to) >= Math.max(1, share * slots);
  }
}

/** The stuck parts of one run, by verdicts a quarter of an hour apart. */
function stuckParts(judge: StuckJudge, run: Run, blockSlots: number): Run[] {
  const parts: Run[] = [];
  for (let from = run.fromSlot; from < run.toSlot;) {
    const to = Math.min(run.toSlot, (Math.floor(from / blockSlots) + 1) * blockSlots);
    if (judge.isStuck(run, (from + to - 1) >> 1)) {
      const before = parts.at(-1);
      if (before?.toSlot === from) before.toSlot = to;
      else parts.push({ fromSlot: from, toSlot: to });
    }
    from = to;
  }
  return parts;
}

/**
 * Stretches in which the channel repeats one value although its pipe cannot have: for two hours at least while the plant runs,
 * far beyond the channel's own usual runs nearby, and while other sensors moved.
 *
 * Shapes  `held`: runs of one value of `leastHeldSlots` or more; `steadyFlow`: the flow of constant-speed pumps.
 * Gaps    no verdict without a running plant; a flow of zero counts only for a main while heat is carried.
 * Source  common practice, no source (limits above).
 */
export function stuckStretches(
  channel: SensorChannel,
  held: readonly Run[],
  activity: PlantActivity,
  stepMinutes: number,
  steadyFlow: boolean,
): Run[] {
  const blockSlots = Math.max(1, Math.round(VERDICT_MINUTES / stepMinutes));
  if (held.length === 0) return [];
  const judge = new StuckJudge(channel, activity, stepMinutes, steadyFlow);
  return held.flatMap((run) => stuckParts(judge, run, blockSlots));
}
