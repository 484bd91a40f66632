import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { FP, FS, PR, PS, readLoop, SR, SS, TEMPERATURES } from '@/lib/hydronics/loop-record';
import type { LoopRecord } from '@/lib/hydronics/loop-record';
import { mixingScale, toMixing } from '@/lib/hydronics/mixing-scale';
import { emptySlotValues } from '@/lib/hydronics/read-slot';
import type { SlotValues } from '@/lib/hydronics/read-slot';
import { errorsOfClass } from '@/lib/hydronics/sensor-errors';
import { slotAverager } from '@/lib/hydronics/slot-average';
import { STATES } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { randomSource } from '../support/simulation/random';
import { simulatePlant } from '../support/simulation/simulate';
import { plantOf, recordOf, WATER } from './support/plants';

const plant = plantOf();
const SCALE = mixingScale(50, WATER);
const N = 240;
const STEP_MINUTES = 5;
const NOISE_F = 0.1;
const NOISE_SHARE = 0.01;
const running = (n: number) => new Float64Array(n).fill(STATES.indexOf('running'));

interface Averaged {
  loop: LoopRecord;
  at: (slot: number) => SlotValues;
}

/** A record averaged with the noise that was put into it. */
function averaged(
  record: Measurements,
  noiseF = NOISE_F,
  noiseShare = NOISE_SHARE,
  state = running(record.n),
): Averaged {
  const loop = readLoop(record, plant, SCALE);
  const errors = {
    ...errorsOfClass(plant, loop.sets),
    noise: new Float64Array(5).fill(noiseF),
    flowNoise: new Float64Array(3).fill(noiseShare),
  };
  const average = slotAverager(loop, errors, state);
  return {
    loop,
    at: (slot) => {
      const values = emptySlotValues();
      average(slot, values);
      return values;
    },
  };
}

const LEVEL = (_: number): number => 0;
const FLOW = (_: number): number => 1200;

/** A loop in forward flow: 44 and 56 F, 1500 and 1200 gpm, with noise; `level` moves the supply and what follows it. */
function loopOf(seed: number, { n = N, noise = 1, levelF = LEVEL, secondary = FLOW } = {}) {
  const random = randomSource(seed, 'averaged');
  const series = (value: (slot: number) => number, sigma: (value: number) => number) =>
    Array.from({ length: n }, (_, slot) => value(slot) + noise * sigma(value(slot)) * random.normal());
  const share = (slot: number) => 1 - secondary(slot) / 1500;
  const temperature = (value: (slot: number) => number) =>
    series(
      (slot) => value(slot) + levelF(slot),
      () => NOISE_F,
    );
  const flow = (value: (slot: number) => number) => series(value, (gpm) => NOISE_SHARE * gpm);
  return {
    primarySupplyF: temperature(() => 44),
    secondarySupplyF: temperature(() => 44),
    secondaryReturnF: temperature(() => 56),
    primaryReturnF: temperature((slot) => 56 - 12 * share(slot)),
    primaryFlowGpm: flow(() => 1500),
    secondaryFlowGpm: flow(secondary),
  };
}
const rms = (values: readonly number[]) => Math.sqrt(values.reduce((sum, x) => sum + x * x, 0) / values.length);
const inside = Array.from({ length: N - 40 }, (_, k) => k + 20);

describe('a record in which nothing moves', () => {
  const { at, loop } = averaged(recordOf(N, STEP_MINUTES, loopOf(1)));

  test('is averaged: scatter falls by a quarter and more', () => {
    for (const [index, value] of [
      [PS, 44],
      [SS, 44],
      [SR, 56],
    ] as const) {
      const level = toMixing(value, SCALE);
      const bare = rms(inside.map((slot) => loop.temperatures[index]![slot]! - level));
      const mean = rms(inside.map((slot) => at(slot).values[index]! - level));
      expect(bare).toBeGreaterThan(0.08);
      expect(mean).toBeLessThan(0.75 * bare);
    }
    const flow = rms(inside.map((slot) => at(slot).values[TEMPERATURES + FP]! / 1500 - 1));
    expect(flow).toBeLessThan(0.85 * NOISE_SHARE);
  });

  test('says of each value how many readings it holds, or what it leans on and how unsure that is', () => {
    const scores = inside.flatMap((slot) => {
      const values = at(slot);
      return [PS, PR, SS, SR].map((index) => {
        const base = values.leanOn[index]!;
        const own = (NOISE_F * NOISE_F) / values.counts[index]!;
        const variance = base < 0 ? own : (NOISE_F * NOISE_F) / values.counts[base]! + values.leanVariance[index]!;
        const truth = [44, 56 - 12 * 0.2, 44, 56][index]!;
        return (values.values[index]! - toMixing(truth, SCALE)) / Math.sqrt(variance);
      });
    });
    // Means over neighbours hold nearly the same readings, so few of these are independent.
    expect(rms(scores)).toBeGreaterThan(0.75);
    expect(rms(scores)).toBeLessThan(1.3);
  });

  test('keeps a missing reading missing, and leaves a neighbour’s gap out of the mean', () => {
    const channels = loopOf(2);
    channels.secondaryReturnF[100] = Number.NaN;
    const gappy = averaged(recordOf(N, STEP_MINUTES, channels));
    expect(gappy.at(100).values[SR]).toBeNaN();
    for (const slot of [97, 99, 101, 104]) {
      const { values, counts } = gappy.at(slot);
      expect(Math.abs(values[SR]! - toMixing(56, SCALE))).toBeLessThan(4 * NOISE_F);
      expect(counts[SR]! % 2 === 0 || counts[SR] === 1).toBe(true);
    }
  });

  test('is left alone where the record showed no noise', () => {
    const bare = averaged(recordOf(N, STEP_MINUTES, loopOf(3)), 0, 0);
    for (const slot of [0, 77, N - 1]) {
      for (let index = 0; index < TEMPERATURES - 1; index += 1) {
        expect(bare.at(slot).values[index]).toBe(bare.loop.temperatures[index]![slot]);
        expect(bare.at(slot).counts[index]).toBe(1);
      }
      expect(bare.at(slot).values[TEMPERATURES + FS]).toBe(bare.loop.flows[FS]![slot]);
    }
  });
});

describe('a record that moves', () => {
  test('on a steady ramp is not shifted', () => {
    const slopeF = 0.01;
    const levelF = (slot: number) => slopeF * slot;
    const misses: number[] = [];
    for (let seed = 1; seed <= 10; seed += 1) {
      const { at } = averaged(recordOf(N, STEP_MINUTES, loopOf(seed, { levelF })));
      misses.push(...inside.map((slot) => at(slot).values[SR]! - toMixing(56 + levelF(slot), SCALE)));
    }
    const mean = misses.reduce((sum, miss) => sum + miss, 0) / misses.length;
    // 2000 means of noise of 0.1 F; a shift by one neighbour would be 0.01 F.
    expect(Math.abs(mean)).toBeLessThan(0.004);
    expect(rms(misses)).toBeLessThan(0.75 * NOISE_F);
  });

  test('at a step is not smeared: both sides keep their level', () => {
    for (let seed = 1; seed <= 20; seed += 1) {
      const levelF = (slot: number) => (slot < 120 ? 0 : 2);
      const { at } = averaged(recordOf(N, STEP_MINUTES, loopOf(seed, { levelF })));
      for (let slot = 110; slot < 130; slot += 1) {
        for (const [index, value] of [
          [PS, 44],
          [SS, 44],
          [SR, 56],
          [PR, 53.6],
        ] as const) {
          const miss = at(slot).values[index]! - toMixing(value + levelF(slot), SCALE);
          expect(Math.abs(miss)).toBeLessThan(5 * NOISE_F);
        }
      }
    }
  });

  test('at a step of a record by the minute lets at most a fifth of it over', () => {
    for (let seed = 1; seed <= 12; seed += 1) {
      const at0 = 118 + (seed % 4);
      const levelF = (slot: number) => (slot < at0 ? 0 : 4);
      const { at } = averaged(recordOf(N, 1, loopOf(seed, { levelF })));
      for (let slot = 105; slot < 135; slot += 1) {
        const miss = at(slot).values[SR]! - toMixing(56 + levelF(slot), SCALE);
        expect(Math.abs(miss)).toBeLessThan(4 / 5 + 3 * NOISE_F);
      }
    }
  });

  test('at a step of the distribution flow keeps the flow and the return that it dilutes', () => {
    const secondary = (slot: number) => (slot < 120 ? 1400 : 900);
    for (let seed = 1; seed <= 10; seed += 1) {
      const { at } = averaged(recordOf(N, STEP_MINUTES, loopOf(seed, { secondary })));
      for (let slot = 110; slot < 130; slot += 1) {
        const { values } = at(slot);
        expect(Math.abs(values[TEMPERATURES + FS]! / secondary(slot) - 1)).toBeLessThan(6 * NOISE_SHARE);
        const mixedF = 56 - 12 * (1 - secondary(slot) / 1500);
        expect(Math.abs(values[PR]! - toMixing(mixedF, SCALE))).toBeLessThan(5 * NOISE_F);
      }
    }
  });

  test('with the load, at a constant share, still gives the mixed return a share that is averaged', () => {
    const random = randomSource(4, 'swinging');
    let swing = 0;
    const swings = Array.from({ length: N }, () => (swing = 0.9 * swing + 0.4 * random.normal()));
    const { at, loop } = averaged(recordOf(N, STEP_MINUTES, loopOf(5, { levelF: (slot) => swings[slot]! })));
    const truth = (slot: number) => toMixing(56 - 2.4 + swings[slot]!, SCALE);
    const bare = rms(inside.map((slot) => loop.temperatures[PR]![slot]! - truth(slot)));
    const mean = rms(inside.map((slot) => at(slot).values[PR]! - truth(slot)));
    expect(bare).toBeGreaterThan(0.08);
    expect(mean).toBeLessThan(bare * 1.05);
    expect(inside.filter((slot) => at(slot).leanOn[PR]! >= 0).length).toBeGreaterThan(inside.length / 2);
  });
});

describe('a staging change', () => {
  const status = (count: number, change: number) =>
    Array.from({ length: N }, (_, slot) => (slot < change || count === 2 ? 1 : 0));
  const { primaryFlowGpm: _, ...channels } = loopOf(6, { secondary: () => 800 });
  /** Both units until the change, one after; no meter: rated flow stands in for it. Levels after it move by a share. */
  const staged = (stepMinutes: number, change: number, moved = 0) => {
    const after = (values: number[]) => values.map((value, slot) => (slot < change ? value : value * (1 + moved)));
    const loop = Object.fromEntries(Object.entries(channels).map(([name, values]) => [name, after(values)]));
    return averaged(recordOf(N, stepMinutes, loop, { unitStatus: [status(2, change), status(1, change)] }));
  };

  test.each([
    [5, 120],
    [1, 118],
    [1, 119],
    [1, 120],
    [1, 121],
  ])(
    'in a record of %i-minute intervals is never averaged across, however alike both sides are (at %i)',
    (stepMinutes, change) => {
      const { at, loop } = staged(stepMinutes, change);
      expect(loop.set[change - 1]).not.toBe(loop.set[change]);
      // What the other side shows, a little or far away, changes nothing.
      for (const moved of [0.003, 0.1]) {
        const again = staged(stepMinutes, change, moved);
        let averagedOnce = 0;
        for (let slot = change - 40; slot < change; slot += 1) {
          const [values, others] = [at(slot), again.at(slot)];
          for (const index of [PS, PR, SS, SR]) expect(others.values[index]).toBe(values.values[index]);
          averagedOnce += values.counts[PS]! > 1 ? 1 : 0;
        }
        expect(averagedOnce).toBeGreaterThan(10);
      }
    },
  );

  test('of the plant’s state is not averaged across either', () => {
    const state = running(N);
    state.fill(STATES.indexOf('starting'), 0, 120);
    const { at } = averaged(recordOf(N, STEP_MINUTES, loopOf(7)), NOISE_F, NOISE_SHARE, state);
    expect(at(119).counts[PS]).toBe(1);
    expect(at(120).counts[PS]).toBe(1);
    expect(at(122).counts[SR]).toBeLessThanOrEqual(5);
  });
});

/** Slots `from` to `to` of a record. */
function cut(record: Measurements, from: number, to: number): Measurements {
  const part = (value: unknown): unknown => {
    if (value instanceof Float64Array) return value.slice(from, to);
    return Array.isArray(value) ? value.map(part) : value;
  };
  const channels = Object.entries(record).map(([key, value]) => [key, part(value)] as const);
  return { ...(Object.fromEntries(channels) as unknown as Measurements), n: to - from };
}

describe('an interval’s answer does not depend on how much record lies beyond an hour around it', () => {
  const plant5 = simulatePlant({ seed: 33, sensing: 'both-meters', balance: 'varied', days: 3, nightOff: false });
  const plant1 = simulatePlant({
    seed: 34,
    sensing: 'pump-status',
    balance: 'varied',
    days: 1,
    stepMinutes: 1,
    nightOff: false,
  });

  // By the minute four neighbours share a window, counted from the start of the record: a cut keeps to multiples of four.
  test.each([
    [5, plant5, 17],
    [1, plant1, 36],
  ])('in a record of %i-minute intervals', (_, { measurements, plant: settings }, stride) => {
    const calibration = calibrateRecord(measurements, settings);
    const whole = estimateIntervals(measurements, settings, calibration);
    const hour = 60 / measurements.stepMinutes;
    let compared = 0;
    for (let slot = 2 * hour; slot < measurements.n - 2 * hour; slot += stride) {
      if (STATES[whole.state[slot]!] !== 'running') continue;
      const part = estimateIntervals(cut(measurements, slot - hour, slot + hour + 1), settings, calibration);
      if (part.state[hour] !== whole.state[slot]) continue;
      compared += 1;
      expect(part.direction[hour]).toBe(whole.direction[slot]);
      for (const channel of [
        'bypass_flow_gpm',
        'bypass_flow_lo_gpm',
        'blended_supply_f',
        'reverse_probability',
      ] as const) {
        expect(part[channel][hour]).toBeCloseTo(whole[channel][slot]!, 5);
      }
    }
    expect(compared).toBeGreaterThan(25);
  });
});
