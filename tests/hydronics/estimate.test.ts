import { describe, expect, test } from 'vitest';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { NINETY_PERCENT_Z, normalCdf } from '@/lib/hydronics/normal';
import { RESULT_CHANNELS } from '@/lib/hydronics/types';
import { estimateOne, plantOf, recordOf, rowOf, TWO_UNITS } from './support/plants';

const REVERSE = { primarySupplyF: 44, secondarySupplyF: 46, secondaryReturnF: 56, primaryReturnF: 56 };
const FORWARD = { primarySupplyF: 44, secondarySupplyF: 44, secondaryReturnF: 56, primaryReturnF: 53 };

describe('with every loop sensor', () => {
  test('1000 gpm of production under 1200 of distribution is 200 gpm backward and 46 F to the buildings', () => {
    const row = estimateOne({ ...REVERSE, primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });
    expect(row.direction).toBe('reverse');
    expect(row.reason).toBe('');
    expect(row.reverse_probability).toBeGreaterThan(0.999);
    expect(row.bypass_flow_gpm).toBeCloseTo(-200, -0.5);
    expect(row.blended_supply_f).toBeCloseTo(46, 1);
    // 12 F made, 10 F used, 2 F blended: production = load + blend - dilution.
    expect(row.load_delta_t_f).toBeCloseTo(10, 1);
    expect(row.production_delta_t_f).toBeCloseTo(12, 2);
    // 500 tons by the trade's factor, 502 by real water.
    expect(row.load_tons).toBeCloseTo(501.7, 0);
  });

  test('2000 gpm of production over 1500 of distribution is 500 gpm forward and supply as made', () => {
    const row = estimateOne({ ...FORWARD, primaryFlowGpm: 2000, secondaryFlowGpm: 1500 });
    expect(row.direction).toBe('forward');
    expect(row.reverse_probability).toBeLessThan(0.001);
    expect(Math.abs(row.bypass_flow_gpm - 500)).toBeLessThan(2);
    expect(row.blended_supply_f).toBeCloseTo(44, 3);
    expect(row.production_delta_t_f).toBeCloseTo(9, 2);
    expect(row.load_tons).toBeCloseTo(752.7, 0);
  });

  test('a second kind of evidence narrows the interval of the bypass', () => {
    const meters = estimateOne({ primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });
    const both = estimateOne({ ...REVERSE, primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });
    const width = (row: typeof meters) => row.bypass_flow_hi_gpm - row.bypass_flow_lo_gpm;
    expect(width(both)).toBeLessThan(0.75 * width(meters));
  });

  test('the blended supply is surer than its sensor, since the balance says it too', () => {
    const sensor = estimateOne({ ...REVERSE });
    const both = estimateOne({ ...REVERSE, primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });
    const width = (row: typeof sensor) => row.blended_supply_hi_f - row.blended_supply_lo_f;
    expect(width(sensor)).toBeCloseTo(2 * NINETY_PERCENT_Z * 0.25, 2);
    expect(width(both)).toBeLessThan(width(sensor));
  });

  test('flows that agree to the gallon stand still', () => {
    const plant = plantOf({
      ...TWO_UNITS,
      sensors: { primaryFlow: { sigmaPercent: 0.5 }, secondaryFlow: { sigmaPercent: 0.5 } },
    });
    expect(estimateOne({ primaryFlowGpm: 1500, secondaryFlowGpm: 1500 }, plant).direction).toBe('still');
  });
});

describe('with flow meters alone', () => {
  const sigma = Math.hypot(30, 36, 0.005 * 1800, 0.005 * plantOf().distributionPumps.flowGpm);

  test('the bypass is their difference, its sigma theirs in quadrature, and P(reverse) = cdf(-b/u)', () => {
    for (const [primaryFlowGpm, secondaryFlowGpm] of [[1000, 1200]] as const) {
      const row = estimateOne({ primaryFlowGpm, secondaryFlowGpm });
      // The other way keeps a chance of 1 in 10,000, with hardly any flow.
      expect(row.bypass_flow_gpm).toBeCloseTo(-200, 1);
      expect((row.bypass_flow_hi_gpm - row.bypass_flow_lo_gpm) / 2 / (NINETY_PERCENT_Z * sigma)).toBeCloseTo(1, 3);
      expect(row.reverse_probability).toBeCloseTo(normalCdf(200 / sigma), 5);
      expect(row.direction).toBe('reverse');
    }
  });

  test('a difference within their doubt has no direction, and says why', () => {
    const row = estimateOne({ primaryFlowGpm: 1000, secondaryFlowGpm: 1020 });
    expect(row).toMatchObject({ direction: 'unknown', reason: 'too near balance' });
    expect(row.reverse_probability).toBeGreaterThan(0.5);
    expect(Math.abs(row.bypass_flow_gpm + 20)).toBeLessThan(0.5);
  });

  test('nothing is said of temperatures', () => {
    const row = estimateOne({ primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });
    expect(row.blended_supply_f).toBeNaN();
    expect(row.load_tons).toBeNaN();
  });
});

describe('with temperatures alone', () => {
  test('warm secondary supply is reverse flow of unknown size', () => {
    const row = estimateOne(REVERSE);
    expect(row.direction).toBe('reverse');
    expect(row.blended_supply_f).toBeCloseTo(46, 6);
    expect(row.bypass_flow_gpm).toBeNaN();
    expect(row.primary_flow_gpm).toBeNaN();
    expect(row.load_tons).toBeNaN();
    expect(row.load_delta_t_f).toBeCloseTo(10, 6);
  });

  test('a diluted return is forward flow of unknown size', () => {
    expect(estimateOne(FORWARD)).toMatchObject({ direction: 'forward', bypass_flow_gpm: Number.NaN });
  });

  test('close to balance the direction is not forced', () => {
    const row = estimateOne({ primarySupplyF: 44, secondarySupplyF: 44.2, secondaryReturnF: 56, primaryReturnF: 55.9 });
    expect(row.direction).toBe('unknown');
    expect(row.reason).toBe('too near balance');
  });

  test('a running loop without a rise says that the temperatures are too close', () => {
    const record = recordOf(
      1,
      5,
      { primarySupplyF: 50, secondarySupplyF: 50.1, secondaryReturnF: 50.4, primaryReturnF: 50.3 },
      { unitStatus: [1, 0] },
    );
    expect(rowOf(record, plantOf({ ...TWO_UNITS, sensors: {} }))).toMatchObject({
      direction: 'unknown',
      reason: 'temperatures too close',
    });
  });

  test('supply warm and return cold at once is no way at all: the pipe ran both ways within the interval', () => {
    const row = estimateOne({ ...REVERSE, primaryReturnF: 53 });
    expect(row).toMatchObject({ direction: 'unknown', reason: 'both ways within the interval' });
    expect(row.blended_supply_f).toBeCloseTo(46, 6);
  });

  test('a supply colder than the water it is made of is no direction but a contradiction', () => {
    const row = estimateOne({ primarySupplyF: 46, secondarySupplyF: 44, secondaryReturnF: 56 });
    expect(row).toMatchObject({ direction: 'unknown', reason: 'sensors contradict' });
  });

  test('without the primary return, an unwarmed supply makes reverse flow improbable, not impossible', () => {
    const row = estimateOne({ primarySupplyF: 44, secondarySupplyF: 44, secondaryReturnF: 56 });
    // Of all shares that may come back, only the smallest leave the supply at 44: sigma * sqrt(2 pi) / (2 span) of them.
    const sigma = 0.25 * Math.SQRT2;
    const odds = (sigma * Math.sqrt(2 * Math.PI)) / (2 * 12);
    expect(row.reverse_probability).toBeCloseTo(odds / (1 + odds), 2);
    expect(row.bypass_flow_gpm).toBeNaN();
  });

  test('the common pipe’s own temperature tells the direction, within what a standing sensor is worth', () => {
    const ends = { primarySupplyF: 44, secondaryReturnF: 56 };
    const reverse = estimateOne({ ...ends, bypassF: 55.8 });
    const forward = estimateOne({ ...ends, bypassF: 44.3 });
    expect(reverse.direction).toBe('reverse');
    expect(reverse.reverse_probability).toBeLessThan(0.99);
    expect(forward.direction).toBe('forward');
    expect(estimateOne({ ...ends, bypassF: 50 })).toMatchObject({
      direction: 'unknown',
      reason: 'both ways within the interval',
    });
  });
});

describe('with temperatures and one flow', () => {
  test.each([
    ['primary', 'reverse', { ...REVERSE, primaryFlowGpm: 1000 }, -200, 1000, 1200],
    ['secondary', 'reverse', { ...REVERSE, secondaryFlowGpm: 1200 }, -200, 1000, 1200],
    ['primary', 'forward', { ...FORWARD, primaryFlowGpm: 2000 }, 500, 2000, 1500],
    ['secondary', 'forward', { ...FORWARD, secondaryFlowGpm: 1500 }, 500, 2000, 1500],
  ] as const)('the %s flow gives the other in %s flow', (_, direction, channels, bypass, primary, secondary) => {
    const row = estimateOne(channels);
    expect(row.direction).toBe(direction);
    // The exact balance differs from round numbers by 0.1 %.
    expect(Math.abs(row.bypass_flow_gpm - bypass)).toBeLessThan(2);
    expect(Math.abs(row.primary_flow_gpm - primary)).toBeLessThan(2);
    expect(Math.abs(row.secondary_flow_gpm - secondary)).toBeLessThan(2);
    expect(row.primary_flow_gpm - row.secondary_flow_gpm).toBeCloseTo(row.bypass_flow_gpm, 6);
  });

  test('three temperatures are enough: the missing return is the same stream in reverse flow', () => {
    const row = estimateOne({ primarySupplyF: 44, secondarySupplyF: 46, primaryReturnF: 56, secondaryFlowGpm: 1200 });
    expect(row.direction).toBe('reverse');
    expect(Math.abs(row.bypass_flow_gpm + 200)).toBeLessThan(2);
    expect(row.secondary_return_f).toBeCloseTo(56, 3);
  });

  test('a missing primary return is mixed at the tee once the flows are known', () => {
    const row = estimateOne({
      primarySupplyF: 44,
      secondarySupplyF: 44,
      secondaryReturnF: 56,
      primaryFlowGpm: 2000,
      secondaryFlowGpm: 1500,
    });
    expect(row.direction).toBe('forward');
    expect(row.primary_return_f).toBeCloseTo(53, 1);
  });
});

describe('with a meter in the common pipe', () => {
  test('a signed one says direction and size', () => {
    const row = estimateOne({ bypassFlowGpm: -150, primaryFlowGpm: 900 });
    expect(row.direction).toBe('reverse');
    expect(row.bypass_flow_gpm).toBeCloseTo(-150, 1);
    expect(row.secondary_flow_gpm).toBeCloseTo(1050, 1);
  });

  test('an unsigned one says the size, and temperatures the direction', () => {
    const row = estimateOne({ bypassFlowUnsignedGpm: 150, ...REVERSE });
    expect(row.direction).toBe('reverse');
    expect(row.bypass_flow_gpm).toBeCloseTo(-150, 1);
  });

  test('an unsigned one alone does not say the direction', () => {
    expect(estimateOne({ bypassFlowUnsignedGpm: 150, primaryFlowGpm: 900 }).direction).toBe('unknown');
  });

  test('an unsigned one far above the net flow has seen both ways within the interval', () => {
    const row = estimateOne({ bypassFlowUnsignedGpm: 300, primaryFlowGpm: 1000, secondaryFlowGpm: 1005 });
    expect(row).toMatchObject({ direction: 'unknown', reason: 'both ways within the interval' });
  });
});

describe('when flows and temperatures disagree a little', () => {
  const width = (row: { bypass_flow_hi_gpm: number; bypass_flow_lo_gpm: number }) =>
    row.bypass_flow_hi_gpm - row.bypass_flow_lo_gpm;
  // Meters say 200 gpm backward; at 47 F the temperatures say 300.
  const agreeing = estimateOne({ ...REVERSE, primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });
  const differing = estimateOne({ ...REVERSE, secondarySupplyF: 47, primaryFlowGpm: 1000, secondaryFlowGpm: 1200 });

  test('the answer lies between them', () => {
    expect(differing.direction).toBe('reverse');
    expect(differing.bypass_flow_gpm).toBeLessThan(-210);
    expect(differing.bypass_flow_gpm).toBeGreaterThan(-290);
  });

  test('the interval widens by their disagreement instead of narrowing by their number', () => {
    expect(width(differing)).toBeGreaterThan(1.1 * width(agreeing));
  });
});

describe('when flows and temperatures disagree grossly', () => {
  const row = estimateOne({ ...REVERSE, primaryFlowGpm: 1500, secondaryFlowGpm: 1000 });

  test('the direction is unknown because the sensors contradict', () => {
    expect(row).toMatchObject({ direction: 'unknown', reason: 'sensors contradict' });
  });

  test('no certainty is claimed: odds are weak and the interval spans both ways', () => {
    expect(row.reverse_probability).toBeGreaterThan(0.05);
    expect(row.reverse_probability).toBeLessThan(0.95);
    expect(row.bypass_flow_lo_gpm).toBeLessThan(0);
    expect(row.bypass_flow_hi_gpm).toBeGreaterThan(0);
  });

  test('flows and blended supply are passed on as measured', () => {
    expect(row.primary_flow_gpm).toBe(1500);
    expect(row.secondary_flow_gpm).toBe(1000);
    expect(row.blended_supply_f).toBeCloseTo(46, 6);
  });
});

describe('nothing to go by', () => {
  test('an idle plant is off, and nothing is concluded from standing water', () => {
    const record = recordOf(1, 5, { ...REVERSE, primaryFlowGpm: 0, secondaryFlowGpm: 0 }, { unitStatus: [0, 0] });
    const row = rowOf(record);
    expect(row).toMatchObject({ state: 'off', direction: 'unknown', reason: 'off' });
    expect(row.primary_supply_f).toBeCloseTo(44, 6);
    expect(row.bypass_flow_gpm).toBeNaN();
    expect(row.reverse_probability).toBeNaN();
  });

  test('a coasting loop sends its whole flow backwards', () => {
    const record = recordOf(1, 5, { primaryFlowGpm: 0, secondaryFlowGpm: 800 }, { unitStatus: [0, 0] });
    const row = rowOf(record);
    expect(row).toMatchObject({ state: 'coasting', direction: 'reverse' });
    expect(row.bypass_flow_gpm).toBeCloseTo(-800, 1);
  });

  test('a record without measurements has no data', () => {
    const row = rowOf(recordOf(1, 5, {}));
    expect(row).toMatchObject({ state: 'unknown', direction: 'unknown', reason: 'no data', quality: 0 });
  });

  test('one temperature and one flow on the same side say nothing of the common pipe', () => {
    const row = estimateOne({ primarySupplyF: 44, primaryFlowGpm: 900 });
    expect(row).toMatchObject({ direction: 'unknown', reason: 'no data', primary_flow_gpm: 900 });
    expect(row.blended_supply_f).toBeNaN();
  });

  test('a lone secondary supply sensor is the blended supply', () => {
    expect(estimateOne({ secondarySupplyF: 46 }).blended_supply_f).toBeCloseTo(46, 6);
  });
});

describe('the call', () => {
  test('gives every result channel the record’s length, and an empty record none', () => {
    const estimates = estimateIntervals(recordOf(7, 15, { ...REVERSE }), plantOf());
    for (const channel of RESULT_CHANNELS) expect(estimates[channel]).toHaveLength(7);
    expect(estimateIntervals(recordOf(0, 15, {}), plantOf()).direction).toHaveLength(0);
  });

  test('refuses a channel of another length, naming it', () => {
    const record = recordOf(3, 5, { primarySupplyF: 44 });
    record.secondarySupplyF = new Float64Array(2);
    expect(() => estimateIntervals(record, plantOf())).toThrow(/secondarySupplyF has length 2/);
    const units = { ...recordOf(3, 5, {}), unitStatus: [new Float64Array(3), new Float64Array(1)] };
    expect(() => estimateIntervals(units, plantOf())).toThrow(/unitStatus\[1\] has length 1/);
  });

  test('does not write to what it was given', () => {
    const record = recordOf(3, 5, { ...REVERSE, primaryFlowGpm: [1000, Number.NaN, -4], secondaryFlowGpm: 1200 });
    const before = structuredClone(record);
    estimateIntervals(record, plantOf());
    expect(record).toEqual(before);
  });
});

describe('a temperature on the move', () => {
  test('is worth less than a steady one: the same instant is surer in a steady record', () => {
    const steady = recordOf(11, 1, { ...REVERSE, secondaryFlowGpm: 1200 });
    const rising = Array.from({ length: 11 }, (_, minute) => 46 + (minute - 5));
    const ramping = recordOf(11, 1, { ...REVERSE, secondarySupplyF: rising, secondaryFlowGpm: 1200 });
    const width = (record: typeof steady) => {
      const row = rowOf(record, plantOf(), 5);
      return row.bypass_flow_hi_gpm - row.bypass_flow_lo_gpm;
    };
    expect(width(ramping)).toBeGreaterThan(2 * width(steady));
    expect(rowOf(ramping, plantOf(), 5).steady).toBe(0);
    expect(rowOf(steady, plantOf(), 5).steady).toBe(1);
  });
});
