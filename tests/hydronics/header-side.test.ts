import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { judgeHeader, placeHeader } from '@/lib/hydronics/header-side';
import type { HeaderStretch } from '@/lib/hydronics/header-side';
import { DIRECTIONS } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { randomSource } from '../support/simulation/random';
import { simulatePlant } from '../support/simulation/simulate';
import type { SimulatedPlant } from '../support/simulation/types';
import { exactLoop, swing } from './support/exact-loop';
import { plantOf, recordOf } from './support/plants';

const SIDES = ['primary', 'secondary'] as const;
type Side = (typeof SIDES)[number];

/** A plant whose supply is measured on one side, and by a header sensor 0.3 F high that truly sits on `side`. */
function withHeader(sim: SimulatedPlant, known: Side, side: Side): Measurements {
  const random = randomSource(7, `header ${side}`);
  const truth = side === 'primary' ? sim.truth.primarySupplyF : sim.truth.blendedSupplyF;
  const { primarySupplyF, secondarySupplyF, ...rest } = sim.measurements;
  const own = known === 'primary' ? { primarySupplyF } : { secondarySupplyF };
  return { ...rest, ...own, headerSupplyF: truth.map((value) => value + 0.3 + 0.15 * random.normal()) };
}

const NO_FAULTS = { days: 4, nightOff: false, lacking: 'none', unitLeaving: false, primarySpeed: 'constant' } as const;

describe('a header sensor of unknown place', () => {
  const plants = [
    simulatePlant({ ...NO_FAULTS, seed: 51, sensing: 'both-meters', balance: 'varied' }),
    simulatePlant({ ...NO_FAULTS, seed: 52, sensing: 'both-meters', balance: 'mostly-reverse' }),
    simulatePlant({ ...NO_FAULTS, seed: 51, sensing: 'pump-status', balance: 'mostly-reverse' }),
    simulatePlant({ ...NO_FAULTS, seed: 51, sensing: 'temperatures', balance: 'mostly-reverse' }),
  ];
  const cases = plants.flatMap((sim) => SIDES.flatMap((known) => SIDES.map((side) => [sim, known, side] as const)));

  test.each(cases.map((each) => [each[0].name, each[1], each[2], each[0]] as const))(
    'in a plant that often runs backward is found on its side: %s, beside a %s sensor, truly %s',
    (_, known, side, sim) => {
      const { header } = calibrateRecord(withHeader(sim, known, side), sim.plant);
      expect(header.side).toBe(side);
      expect(side === 'primary' ? header.primaryProbability : 1 - header.primaryProbability).toBeGreaterThan(0.9);
    },
  );

  test('is unknown in a plant that never runs backward: both sides show one stream', () => {
    for (const seed of [1, 2]) {
      const { record, truth } = exactLoop({ seed, days: 3, share: swing(0.1, 0.4, 96) });
      const random = randomSource(seed, 'header');
      const header = Float64Array.from(truth.primarySupplyF, (value) => value + 0.3 + 0.1 * random.normal());
      const known: Measurements = { ...record, headerSupplyF: header };
      delete known.secondarySupplyF;
      expect(calibrateRecord(known, plantOf()).header.side).toBe('unknown');
    }
  });

  test('joins the estimate where it was placed: the blend is known, and the direction surer', () => {
    const sim = plants[0]!;
    const record = withHeader(sim, 'primary', 'secondary');
    const { headerSupplyF: _, ...bare } = record;
    const calibration = calibrateRecord(record, sim.plant);
    const [placed, without] = [
      estimateIntervals(record, sim.plant, calibration),
      estimateIntervals(bare, sim.plant, calibrateRecord(bare, sim.plant)),
    ];
    const width = (hi: Float64Array, lo: Float64Array) =>
      hi.reduce((sum, value, slot) => sum + (value - lo[slot]! || 0), 0);
    expect(width(placed.bypass_flow_hi_gpm, placed.bypass_flow_lo_gpm)).toBeLessThan(
      width(without.bypass_flow_hi_gpm, without.bypass_flow_lo_gpm),
    );
    let [right, judged] = [0, 0];
    sim.truth.bypassGpm.forEach((bypassGpm, slot) => {
      if (sim.truth.running[slot] !== 1 || Math.abs(bypassGpm) < 0.05 * sim.truth.secondaryFlowGpm[slot]!) return;
      const call = DIRECTIONS[placed.direction[slot]!];
      judged += 1;
      if (call === (bypassGpm < 0 ? 'reverse' : 'forward')) right += 1;
    });
    expect(right / judged).toBeGreaterThan(0.97);
    // Its offset is found like any other sensor's.
    expect(calibration.findings.find(({ role }) => role === 'secondarySupplyTemp')).toBeDefined();
  });
});

describe('the odds of a side', () => {
  const N = 200;
  /** Ten stretches of four slots: the first `backward` of them run backward, by everything but the header. */
  const stretches = (backward: number, told = 0.99, share = 0.3): HeaderStretch[] =>
    Array.from({ length: 40 }, (_, index) => ({
      slot: 5 * index,
      slots: 4,
      reverse: index < backward ? told : 1 - told,
      share,
      worth: 0.25,
    }));
  const record = (
    header: (slot: number) => number,
    channels: Partial<Record<keyof Measurements, number>> = { primarySupplyF: 44 },
  ) =>
    recordOf(N, 5, {
      ...channels,
      secondaryReturnF: 56,
      headerSupplyF: Array.from({ length: N }, (_, slot) => header(slot)),
    });
  const backUntil = (stretch: number, blendF: number) => (slot: number) => 44.2 + (slot < 5 * stretch ? blendF : 0);

  test('go by whether it departs when the pipe runs backward', () => {
    expect(judgeHeader(record(backUntil(20, 3)), stretches(20)).side).toBe('secondary');
    expect(
      judgeHeader(
        record(() => 44.2),
        stretches(20),
      ).side,
    ).toBe('primary');
  });

  test('do not go by its lasting offset, whatever its size', () => {
    for (const offsetF of [-3, 0, 3]) {
      const moved = record((slot) => backUntil(20, 3)(slot) + offsetF);
      expect(judgeHeader(moved, stretches(20)).side).toBe('secondary');
    }
  });

  test('are turned round beside a sensor of the secondary side', () => {
    const beside = { secondarySupplyF: 46 };
    const apart = (slot: number) => 46.2 - (slot < 100 ? 3 : 0);
    expect(judgeHeader(record(apart, beside), stretches(20)).side).toBe('primary');
    expect(
      judgeHeader(
        record(() => 46.2, beside),
        stretches(20),
      ).side,
    ).toBe('secondary');
  });

  test('are even without reverse flow, without a sensor beside it, and with too few stretches', () => {
    expect(
      judgeHeader(
        record(() => 44.2),
        stretches(0, 1),
      ).side,
    ).toBe('unknown');
    expect(
      judgeHeader(
        record(() => 44.2, {}),
        stretches(20),
      ),
    ).toEqual({ side: 'unknown', primaryProbability: 0.5 });
    expect(
      judgeHeader(
        record(() => 44.2),
        stretches(20).slice(0, 5),
      ).side,
    ).toBe('unknown');
  });

  test('are not moved by one wild stretch, nor by gaps', () => {
    const wild = record((slot) => (slot >= 50 && slot < 54 ? 70 : 44.2));
    expect(judgeHeader(wild, stretches(20)).side).toBe('primary');
    const gappy = record((slot) => (slot % 3 === 0 ? Number.NaN : backUntil(20, 3)(slot)));
    expect(judgeHeader(gappy, stretches(20)).side).toBe('secondary');
  });

  test('say nothing by staying together where the blend would hardly show', () => {
    expect(
      judgeHeader(
        record(() => 44.2),
        stretches(20, 0.99, 0.03),
      ).side,
    ).toBe('unknown');
  });

  test('are absent without a header sensor', () => {
    expect(judgeHeader(recordOf(N, 5, { primarySupplyF: 44 }), stretches(20)).side).toBe('absent');
  });
});

describe('placing the header', () => {
  const record = recordOf(3, 5, { headerSupplyF: 45, secondaryReturnF: 56 });
  const at = (side: Side | 'unknown', measurements = record) =>
    placeHeader(measurements, { side, primaryProbability: 0.5 });

  test('puts it where it was found, if no other sensor sits there', () => {
    expect(at('primary').primarySupplyF).toBe(record.headerSupplyF);
    expect(at('secondary').secondarySupplyF).toBe(record.headerSupplyF);
    const own = { ...record, primarySupplyF: new Float64Array(3).fill(44) };
    expect(at('primary', own).primarySupplyF).toBe(own.primarySupplyF);
  });

  test('leaves it out where it is unknown, and the record alone where there is none', () => {
    const { headerSupplyF, primarySupplyF, secondarySupplyF } = at('unknown');
    expect([headerSupplyF, primarySupplyF, secondarySupplyF]).toEqual([undefined, undefined, undefined]);
    const plain = recordOf(3, 5, { primarySupplyF: 44 });
    expect(at('primary', plain)).toBe(plain);
  });
});
