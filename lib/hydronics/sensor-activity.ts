import type { SensorChannel } from './sensor-channels';
import { plantStates } from './state';
import { pumpOn, unitOn } from './units-on';
import { STATES } from './types';
import type { Measurements, PlantModel, UnitModel } from './types';

/** A change over one hour beyond noise: the plant is alive. */
const MOVED_F = 0.5;
const MOVED_FLOW_SHARE = 0.03;
/** Rise over production beyond this: heat is carried, so water flows. */
const LOADED_RISE_F = 3;

const RUNNING = STATES.indexOf('running');
const STARTING = STATES.indexOf('starting');
const COASTING = STATES.indexOf('coasting');
const OFF = STATES.indexOf('off');

/** Running total of a count: `total[b] - total[a]` slots in a..b (half-open). */
export type Tally = Int32Array;
export const within = (tally: Tally, from: number, to: number): number =>
  (tally[to] as number) - (tally[from] as number);

function tallyOf(n: number, counts: (slot: number) => boolean): Tally {
  const tally = new Int32Array(n + 1);
  for (let slot = 0; slot < n; slot += 1) tally[slot + 1] = (tally[slot] as number) + (counts(slot) ? 1 : 0);
  return tally;
}

/**
 * What the plant did meanwhile, counted so that any stretch is looked up at once. Each count is made when first asked for:
 * most records ask for none.
 */
export class PlantActivity {
  readonly hourSlots: number;
  private readonly made = new Map<string, Tally>();
  private states: Float64Array | undefined;

  constructor(
    private readonly measurements: Measurements,
    private readonly plant: PlantModel,
    private readonly channels: readonly SensorChannel[],
  ) {
    this.hourSlots = Math.max(1, Math.round(60 / measurements.stepMinutes));
  }

  private stateCodes(): Float64Array {
    if (!this.states) {
      this.states = new Float64Array(this.measurements.n);
      plantStates(this.measurements, this.plant, this.states);
    }
    return this.states;
  }

  /** Whether the plant runs at a slot. */
  isRunning(slot: number): boolean {
    const code = this.stateCodes()[slot];
    return code === RUNNING || code === STARTING;
  }

  /** Slots in which the sensor's pipe carries water for certain: the plant runs, or its own unit does. */
  running(unitIndex: number): Tally {
    if (unitIndex === 0) {
      const codes = this.stateCodes();
      return this.tally('running', (slot) => codes[slot] === RUNNING || codes[slot] === STARTING);
    }
    return this.tally(`running ${unitIndex}`, (slot) => {
      return unitOn(this.measurements, this.plant.units[unitIndex - 1] as UnitModel, unitIndex - 1, slot) === 1;
    });
  }

  /** Slots in which it carries none, or warm water, for certain. */
  resting(unitIndex: number): Tally {
    if (unitIndex === 0) {
      const codes = this.stateCodes();
      return this.tally('resting', (slot) => codes[slot] === OFF || codes[slot] === COASTING);
    }
    return this.tally(`resting ${unitIndex}`, (slot) => {
      return unitOn(this.measurements, this.plant.units[unitIndex - 1] as UnitModel, unitIndex - 1, slot) === 0;
    });
  }

  /** Slots in which any sensor shows something else than an hour before. */
  moved(): Tally {
    return this.movedTally('moved', this.channels, MOVED_F);
  }

  /** Slots in which one of these sensors shows something else by this much, deg F. */
  movedBy(names: readonly SensorChannel['name'][], limitF: number): Tally {
    const channels = this.channels.filter((channel) => names.includes(channel.name));
    return this.movedTally(`moved ${names.join(' ')} ${limitF}`, channels, limitF);
  }

  /** Slots in which a unit's status or pump says that it runs and production carries heat. */
  loaded(): Tally {
    const { primarySupplyF, primaryReturnF } = this.measurements;
    return this.tally('loaded', (slot) => {
      const rise = (primaryReturnF?.[slot] ?? Number.NaN) - (primarySupplyF?.[slot] ?? Number.NaN);
      // Standing water keeps its rise, too.
      const pumped = this.plant.units.some((unit, index) => pumpOn(this.measurements, unit, index, slot) === 1);
      return pumped && rise >= LOADED_RISE_F;
    });
  }

  private movedTally(name: string, channels: readonly SensorChannel[], movedF: number): Tally {
    let tally = this.made.get(name);
    if (tally) return tally;
    const { n } = this.measurements;
    tally = new Int32Array(n + 1);
    for (const { values, lo, hi, quantity, designGpm } of channels) {
      const limit = quantity === 'temperature' ? movedF : MOVED_FLOW_SHARE * designGpm;
      for (let slot = this.hourSlots; slot < n; slot += 1) {
        const now = values[slot] as number;
        const before = values[slot - this.hourSlots] as number;
        // A glitch is no movement of the plant; NaN compares false.
        if (Math.abs(now - before) >= limit && now >= lo && now <= hi && before >= lo && before <= hi)
          tally[slot + 1] = 1;
      }
    }
    for (let slot = 0; slot < n; slot += 1) tally[slot + 1] = (tally[slot + 1] as number) + (tally[slot] as number);
    this.made.set(name, tally);
    return tally;
  }

  private tally(name: string, counts: (slot: number) => boolean): Tally {
    let tally = this.made.get(name);
    if (!tally) this.made.set(name, (tally = tallyOf(this.measurements.n, counts)));
    return tally;
  }
}
