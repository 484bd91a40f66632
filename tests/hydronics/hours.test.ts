import { describe, expect, test } from 'vitest';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { heatFactorBtuPerHourPerGpmF } from '@/lib/hydronics/fluids';
import { summariseHours } from '@/lib/hydronics/hours';
import { excessPumpPowerKw } from '@/lib/hydronics/pumps';
import { decouplerBalance } from '@/lib/hydronics/tees';
import type { HourResult, Measurements, PlantModel } from '@/lib/hydronics/types';
import { plantOf, recordOf, TWO_UNITS, WATER } from './support/plants';

const HOUR_MS = 3_600_000;
const plant = plantOf();

interface Scene {
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  secondaryReturnF: number;
  primarySupplyF?: number;
  setpointF?: number;
  unitStatus?: number[];
}

/** Two hours of one steady scene of exact sensors at five minutes: an hour of running before the one that is judged. */
function recordOfScene(scene: Scene): Measurements {
  const coldF = scene.primarySupplyF ?? 44;
  const { primaryFlowGpm, secondaryFlowGpm, secondaryReturnF } = scene;
  const tees = decouplerBalance(primaryFlowGpm, secondaryFlowGpm, coldF, secondaryReturnF, WATER);
  return recordOf(
    24,
    5,
    {
      primarySupplyF: coldF,
      secondarySupplyF: tees.secondarySupplyF,
      secondaryReturnF,
      primaryReturnF: tees.primaryReturnF,
      primaryFlowGpm,
      secondaryFlowGpm,
      ...(scene.setpointF === undefined ? {} : { supplySetpointF: scene.setpointF }),
    },
    { unitStatus: scene.unitStatus ?? [1, 1] },
  );
}

function hoursOf(record: Measurements, model: PlantModel = plant, starts = [0, HOUR_MS]): HourResult[] {
  return summariseHours(
    estimateIntervals(record, model),
    record,
    model,
    { startMs: 0, stepMinutes: record.stepMinutes },
    starts,
  );
}
const hourOf = (scene: Scene, model: PlantModel = plant): HourResult =>
  hoursOf(recordOfScene(scene), model)[1] as HourResult;

describe('a healthy hour', () => {
  // Full load: 900 tons at 12 F.
  const hour = hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1790, secondaryReturnF: 56 });

  test('is not low, has no cause and costs nothing', () => {
    expect(hour).toMatchObject({ low: false, cause: 'none', excessEnergyKwh: 0, excessCost: 0, runningMinutes: 60 });
    expect(hour.causeConfidence).toBeNaN();
  });

  test('makes its load at the design delta-T', () => {
    expect(hour.loadTons).toBeCloseTo(898, -1);
    expect(hour.deltaTF).toBeCloseTo(12, 1);
    expect(hour.expectedDeltaTF).toBeCloseTo(12, 1);
    expect(hour.excessFlowGpm).toBeLessThan(20);
  });
});

describe('delta_t_f', () => {
  test('is load over flow on the distribution side', () => {
    const hour = hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1500, secondaryReturnF: 52 });
    const factor = heatFactorBtuPerHourPerGpmF(48, WATER);
    expect(hour.deltaTF).toBeCloseTo((hour.loadTons * 12_000) / (factor * hour.secondaryFlowGpm), 2);
  });

  test('of an hour of two halves is total load over total flow, not the mean of the halves', () => {
    const flow = [...new Array<number>(6).fill(600), ...new Array<number>(6).fill(1800)];
    const returnF = [...new Array<number>(6).fill(58), ...new Array<number>(6).fill(50)];
    const record = recordOf(
      12,
      5,
      { primarySupplyF: 44, secondarySupplyF: 44, secondaryReturnF: returnF, secondaryFlowGpm: flow },
      { unitStatus: [1, 1] },
    );
    const hour = hoursOf(record, plant, [0])[0];
    // (600 * 14 + 1800 * 6) / 2400 = 8, where the mean of 14 and 6 is 10.
    expect(hour?.deltaTF).toBeCloseTo(8, 1);
  });
});

describe('low', () => {
  test('needs delta-T below 80 % of design and load above 15 % of design', () => {
    // 1700 gpm at 9 F is 640 tons; at 10 F it is above 80 % of 12 F.
    expect(hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1790, secondaryReturnF: 53 }).low).toBe(true);
    expect(hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1790, secondaryReturnF: 54 }).low).toBe(false);
    // 350 gpm at 9 F is 130 tons: under 15 % of 900.
    expect(hourOf({ primaryFlowGpm: 900, secondaryFlowGpm: 350, secondaryReturnF: 53, unitStatus: [1, 0] }).low).toBe(
      false,
    );
  });

  test('also looks at the production side', () => {
    const hour = hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1000, secondaryReturnF: 56 });
    expect(hour.deltaTF).toBeGreaterThan(11.9);
    expect(hour.productionDeltaTF).toBeLessThan(7);
    expect(hour.low).toBe(true);
  });

  test('follows the plant’s own shares', () => {
    const strict = plantOf({ ...TWO_UNITS, low: { loadShare: 0.15, deltaTShare: 0.9 } });
    expect(hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1790, secondaryReturnF: 54 }, strict).low).toBe(true);
  });

  test('judges running intervals only: an hour of starting and coasting is never low', () => {
    const status = new Array<number>(12).fill(0);
    const record = recordOf(
      12,
      5,
      { primarySupplyF: 44, secondarySupplyF: 50, secondaryReturnF: 52, primaryFlowGpm: 0, secondaryFlowGpm: 1500 },
      { unitStatus: [status, status] },
    );
    const hour = hoursOf(record, plant, [0])[0];
    expect(hour).toMatchObject({ low: false, runningMinutes: 0, reverseMinutes: 0, excessEnergyKwh: 0, cause: 'none' });
    expect(hour?.loadTons).toBeNaN();
  });

  test('needs a quarter of an hour of running', () => {
    // Units off again after ten minutes.
    const status = [1, 1, ...new Array<number>(10).fill(0)];
    const record = recordOf(
      12,
      5,
      { primarySupplyF: 44, secondarySupplyF: 44, secondaryReturnF: 50, primaryFlowGpm: 1800, secondaryFlowGpm: 1790 },
      { unitStatus: [status, status] },
    );
    expect(hoursOf(record, plant, [0])[0]).toMatchObject({ runningMinutes: 10, low: false });
  });
});

describe('an hour of reverse flow', () => {
  // Healthy coils at 73 % load fed 47.6 F in place of 44: they take nearly half as much water again.
  const scene = { primaryFlowGpm: 1200, secondaryFlowGpm: 1660, secondaryReturnF: 57 };
  const hour = hourOf(scene);

  test('counts its minutes and the mean and largest flow backward, as positive amounts', () => {
    expect(hour.reverseMinutes).toBe(60);
    expect(hour.reverseFlowGpm).toBeCloseTo(460, -1);
    expect(hour.reverseFlowMaxGpm).toBeGreaterThanOrEqual(hour.reverseFlowGpm - 1e-9);
    expect(hour.bypassFlowGpm).toBeCloseTo(-hour.reverseFlowGpm, 6);
    expect(hour.blendedSupplyF).toBeCloseTo(47.6, 1);
    expect(hour.blendedSupplyMaxF).toBeGreaterThanOrEqual(hour.blendedSupplyF - 1e-9);
  });

  test('is caused by the blend that warms the coils, with confidence from 0 to 1', () => {
    expect(hour).toMatchObject({ low: true, cause: 'reverse-flow' });
    expect(hour.causeConfidence).toBeGreaterThan(0.5);
    expect(hour.causeConfidence).toBeLessThanOrEqual(1);
  });

  test('costs its pumping beyond the attainable flow, times the tariff', () => {
    expect(hour.excessEnergyKwh).toBeGreaterThan(0);
    expect(hour.excessCost).toBeCloseTo(0.14 * hour.excessEnergyKwh, 9);
    const neededGpm = hour.secondaryFlowGpm - hour.avoidableFlowGpm;
    expect(hour.strandedTons).toBe(0);
    expect(hour.excessEnergyKwh).toBeCloseTo(
      excessPumpPowerKw(hour.secondaryFlowGpm, neededGpm, plant.distributionPumps),
      6,
    );
  });

  test('has no cost without a tariff', () => {
    const free = plantOf({ ...TWO_UNITS, tariff: null });
    const untariffed = hourOf(scene, free);
    expect(untariffed.excessCost).toBeNaN();
    expect(untariffed.excessEnergyKwh).toBeGreaterThan(0);
  });
});

describe('an hour of surplus', () => {
  test('with a unit that the load does not need is surplus production, with its tons stranded and auxiliaries charged', () => {
    const hour = hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 800, secondaryReturnF: 56 });
    expect(hour).toMatchObject({ low: true, cause: 'surplus-production', strandedTons: 450, unitsRunning: 2 });
    expect(hour.avoidableFlowGpm).toBeCloseTo(900, -1);
    // Assumed auxiliaries: 0.1 kW a rated ton, so 45 kW for the unit that could stop.
    expect(hour.excessEnergyKwh).toBeGreaterThanOrEqual(45);
    expect(hour.excessEnergyKwh).toBeLessThan(60);
  });

  test('with the last unit of a constant-flow plant running is low but has nothing to avoid', () => {
    const hour = hourOf({ primaryFlowGpm: 900, secondaryFlowGpm: 400, secondaryReturnF: 57.5, unitStatus: [1, 0] });
    expect(hour).toMatchObject({ low: true, cause: 'none', strandedTons: 0, unitsRunning: 1 });
    expect(hour.excessFlowGpm).toBeGreaterThan(450);
    expect(hour.avoidableFlowGpm).toBeLessThan(60);
  });

  test('two units are not surplus when the flow needs both', () => {
    const hour = hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1300, secondaryReturnF: 52 });
    expect(hour.cause).not.toBe('surplus-production');
  });
});

describe('other causes', () => {
  test('coils that take too much water at production temperature fall short', () => {
    const hour = hourOf({ primaryFlowGpm: 1800, secondaryFlowGpm: 1750, secondaryReturnF: 51.5 });
    expect(hour).toMatchObject({ low: true, cause: 'coil-shortfall' });
  });

  test('below 30 % load the same is light load: nothing sure can be said of coils there', () => {
    const hour = hourOf({ primaryFlowGpm: 900, secondaryFlowGpm: 850, secondaryReturnF: 50, unitStatus: [1, 0] });
    expect(hour).toMatchObject({ low: true, cause: 'light-load' });
  });

  test('supply above the set-point in force opens the valves; a deliberate reset does not count', () => {
    const scene = { primaryFlowGpm: 1800, secondaryFlowGpm: 1780, secondaryReturnF: 57, primarySupplyF: 48 };
    expect(hourOf({ ...scene, setpointF: 44 })).toMatchObject({ low: true, cause: 'warm-supply' });
    expect(hourOf({ ...scene, setpointF: 48 }).cause).not.toBe('warm-supply');
  });

  test('an hour in which sensors contradict each other has no cause but them', () => {
    const record = recordOfScene({ primaryFlowGpm: 1800, secondaryFlowGpm: 1780, secondaryReturnF: 52 });
    // By the meters hardly anything crosses over; by the temperatures three eighths come back.
    record.secondarySupplyF?.fill(47);
    record.primaryReturnF?.fill(52);
    const hour = hoursOf(record)[1];
    expect(hour).toMatchObject({ low: true, cause: 'sensor-doubt', unknownMinutes: 60 });
    expect(hour?.causeConfidence).toBeCloseTo(1, 9);
  });
});

describe('a building bridge', () => {
  const bridge = plantOf({ ...TWO_UNITS, design: { ...TWO_UNITS.design, blendedSupplyF: 47 } }, 'building-bridge');

  test('may run backwards up to the blend it is built for, and not beyond', () => {
    // 47 F from 44 and 59: a fifth of the distribution flow comes back.
    const asBuilt = hourOf({ primaryFlowGpm: 1400, secondaryFlowGpm: 1750, secondaryReturnF: 59 }, bridge);
    expect(asBuilt.blendedSupplyF).toBeCloseTo(47, 1);
    expect(asBuilt).toMatchObject({ reverseMinutes: 0, low: false });
    const warmer = hourOf({ primaryFlowGpm: 1000, secondaryFlowGpm: 1750, secondaryReturnF: 59 }, bridge);
    expect(warmer.reverseMinutes).toBe(60);
  });
});

describe('a variable-primary plant without a bypass meter', () => {
  test('is one loop: its delta-T and flow are those of production', () => {
    const model = plantOf(TWO_UNITS, 'variable-primary');
    const record = recordOf(
      12,
      5,
      { primarySupplyF: 44, primaryReturnF: 51, primaryFlowGpm: 1700 },
      { unitStatus: [1, 1] },
    );
    const hour = hoursOf(record, model, [0])[0];
    expect(hour).toMatchObject({ low: true, cause: 'coil-shortfall' });
    expect(hour?.deltaTF).toBeCloseTo(7, 1);
  });
});

describe('hours in time', () => {
  const record = recordOfScene({ primaryFlowGpm: 1300, secondaryFlowGpm: 1660, secondaryReturnF: 56.3 });

  test('an hour takes the intervals that start in it', () => {
    const [first] = hoursOf(record, plant, [30 * 60_000]);
    expect(first).toMatchObject({ hourStartMs: 30 * 60_000, runningMinutes: 60, quality: 1 });
  });

  test('half-hour zones and short hours are what the caller says they are', () => {
    const halves = hoursOf(record, plant, [0, 30 * 60_000, 90 * 60_000]);
    expect(halves.map((hour) => hour.runningMinutes)).toEqual([30, 60, 30]);
  });

  test('intervals outside the record count as missing', () => {
    const [before, after] = [hoursOf(record, plant, [-30 * 60_000])[0], hoursOf(record, plant, [9 * HOUR_MS])[0]];
    expect(before).toMatchObject({ runningMinutes: 30, quality: 0.5 });
    expect(after).toMatchObject({ runningMinutes: 0, quality: 0, low: false });
  });

  test('a gap in the list of starts does not make an hour longer', () => {
    expect(hoursOf(record, plant, [0, 5 * HOUR_MS])[0]?.runningMinutes).toBe(60);
  });

  test('refuses a step or a length that is not the record’s', () => {
    const estimates = estimateIntervals(record, plant);
    expect(() => summariseHours(estimates, record, plant, { startMs: 0, stepMinutes: 1 }, [0])).toThrow(RangeError);
    const shorter = recordOf(3, 5, {});
    expect(() => summariseHours(estimates, shorter, plant, { startMs: 0, stepMinutes: 5 }, [0])).toThrow(RangeError);
  });
});

describe('a record without flow', () => {
  test('knows reverse minutes and degrees, but neither load nor low', () => {
    const record = recordOf(12, 5, {
      primarySupplyF: 44,
      secondarySupplyF: 46.5,
      secondaryReturnF: 54,
      primaryReturnF: 54,
    });
    const hour = hoursOf(record, plant, [0])[0];
    expect(hour).toMatchObject({ reverseMinutes: 60, low: false });
    expect(hour?.deltaTF).toBeCloseTo(7.5, 6);
    expect(hour?.loadTons).toBeNaN();
    expect(hour?.reverseFlowGpm).toBeNaN();
  });
});
