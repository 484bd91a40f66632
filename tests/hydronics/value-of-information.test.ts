import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import type { Calibration, FurtherSensor, SensorRole } from '@/lib/hydronics/calibration-types';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { DIRECTIONS, STATES } from '@/lib/hydronics/types';
import type { Measurements, PlantModel } from '@/lib/hydronics/types';
import { furtherSensors } from '@/lib/hydronics/value-of-information';
import { randomSource } from '../support/simulation/random';
import { simulatePlant } from '../support/simulation/simulate';
import type { SimulatedPlant, SimulatedTruth, SimulationOptions } from '../support/simulation/types';
import { exactLoop, LOOP_TEMPERATURES } from './support/exact-loop';
import { plantOf, recordOf } from './support/plants';

interface Advised {
  sim: SimulatedPlant;
  calibration: Calibration;
  further: FurtherSensor[];
}

function advised(options: Partial<SimulationOptions>): Advised {
  const sim = simulatePlant({
    seed: 61,
    sensing: 'one-meter',
    balance: 'varied',
    days: 3,
    nightOff: false,
    unitLeaving: false,
    primarySpeed: 'constant',
    bypassTemp: false,
    lacking: 'none',
    ...options,
  });
  const calibration = calibrateRecord(sim.measurements, sim.plant);
  return { sim, calibration, further: furtherSensors(sim.measurements, sim.plant, calibration) };
}

/** Mean half-width of the bypass interval over the running intervals, and the hours without a direction. */
function knowledge(record: Measurements, plant: PlantModel, calibration: Calibration) {
  const estimates = estimateIntervals(record, plant, calibration);
  let [sum, count, unknown] = [0, 0, 0];
  for (let slot = 0; slot < record.n; slot += 1) {
    if (STATES[estimates.state[slot]!] !== 'running') continue;
    if (DIRECTIONS[estimates.direction[slot]!] === 'unknown') unknown += record.stepMinutes / 60;
    const half = (estimates.bypass_flow_hi_gpm[slot]! - estimates.bypass_flow_lo_gpm[slot]!) / 2;
    if (!Number.isFinite(half)) continue;
    sum += half;
    count += 1;
  }
  return { halfWidth: sum / count, unknownHours: unknown };
}

const TRUTH: Partial<Record<SensorRole, [keyof Measurements, keyof SimulatedTruth]>> = {
  primaryReturnTemp: ['primaryReturnF', 'primaryReturnF'],
  secondaryReturnTemp: ['secondaryReturnF', 'secondaryReturnF'],
  primaryFlow: ['primaryFlowGpm', 'primaryFlowGpm'],
  secondaryFlow: ['secondaryFlowGpm', 'secondaryFlowGpm'],
  bypassFlow: ['bypassFlowGpm', 'bypassGpm'],
};

/** What the record would have known had that sensor really been there, with an error of its class, calibrated anew. */
function reallyAdded({ sim }: Advised, sensor: FurtherSensor): number {
  const [channel, quantity] = TRUTH[sensor.role]!;
  const random = randomSource(3, sensor.role);
  const error = random.within(sensor.sigma, 2 * sensor.sigma);
  const flow = sensor.role.endsWith('Flow');
  const values = sim.truth[quantity].map((value) =>
    flow ? value * (1 + error / 100) * (1 + 0.007 * random.normal()) : value + error + 0.1 * random.normal(),
  );
  const { temperatureSigmaF, flowSigmaPercent } = sim.plant.sensors;
  const own = { [sensor.role]: sensor.sigma };
  const sensors = flow
    ? { temperatureSigmaF, flowSigmaPercent: { ...flowSigmaPercent, ...own } }
    : { temperatureSigmaF: { ...temperatureSigmaF, ...own }, flowSigmaPercent };
  const plant = { ...sim.plant, sensors };
  const record = { ...sim.measurements, [channel]: values };
  return knowledge(record, plant, calibrateRecord(record, plant)).halfWidth;
}

const PLANTS: [string, Advised][] = [
  ['one meter', advised({})],
  ['one meter near balance', advised({ balance: 'near-balance' })],
  ['both meters', advised({ sensing: 'both-meters' })],
  ['both meters without a primary return', advised({ sensing: 'both-meters', lacking: 'primaryReturnF' })],
  ['pump status', advised({ sensing: 'pump-status' })],
];

describe.each(PLANTS)('in a plant with %s', (_, plant) => {
  const { sim, calibration, further } = plant;

  test('today’s half-width is that of the estimate, within a tenth', () => {
    const { halfWidth } = knowledge(sim.measurements, sim.plant, calibration);
    for (const { nowHalfWidth, unit } of further) {
      expect(unit).toBe('gpm');
      expect(nowHalfWidth / halfWidth).toBeGreaterThan(0.9);
      expect(nowHalfWidth / halfWidth).toBeLessThan(1.1);
    }
  });

  test('a meter in the common pipe narrows the interval, and most of all', () => {
    expect(further[0]).toMatchObject({ role: 'bypassFlow', kind: 'new' });
    expect(further[0]!.withHalfWidth).toBeLessThan(0.8 * further[0]!.nowHalfWidth);
  });

  test('each sensor named does something, and the first the most', () => {
    for (const { withHalfWidth, nowHalfWidth, withUnknownHours, nowUnknownHours } of further) {
      expect(withHalfWidth < nowHalfWidth || withUnknownHours < nowUnknownHours).toBe(true);
    }
    const widths = further.map(({ withHalfWidth }) => withHalfWidth);
    expect(widths).toEqual([...widths].sort((a, b) => a - b));
  });

  // The promise leaves out that a record with the sensor also tells the others’ errors better: it is kept, or more than kept.
  test('what is promised of a new sensor is kept when it is really there', () => {
    for (const sensor of further.filter(({ role, kind }) => kind === 'new' && TRUTH[role])) {
      const ratio = reallyAdded(plant, sensor) / sensor.withHalfWidth;
      expect(ratio).toBeLessThan(1.25);
      expect(ratio).toBeGreaterThan(0.5);
    }
  });
});

describe('what is advised', () => {
  const oneMeter = PLANTS[0]![1];

  test('is a second main meter where one is missing, and never one that is there and good', () => {
    const roles = oneMeter.further.filter(({ kind }) => kind === 'new').map(({ role }) => role);
    const missing = oneMeter.sim.measurements.primaryFlowGpm ? 'secondaryFlow' : 'primaryFlow';
    expect(roles).toContain(missing);
    for (const { role, kind, sigma } of oneMeter.further.filter((each) => each.kind === 'better')) {
      const finding = oneMeter.calibration.findings.find((each) => each.role === role)!;
      expect(kind).toBe('better');
      expect(sigma).toBeLessThan((finding.hi - finding.lo) / 2);
    }
  });

  test('is in shares of the main flow where no flow is measured, and then no meter', () => {
    const { record } = exactLoop({ days: 2, channels: ['primarySupplyF', 'secondarySupplyF', 'secondaryReturnF'] });
    const further = furtherSensors(record, plantOf(), calibrateRecord(record, plantOf()));
    expect(further.map(({ role }) => role)).toContain('primaryReturnTemp');
    for (const { unit, role, withHalfWidth } of further) {
      expect(unit).toBe('share');
      expect(role.endsWith('Flow')).toBe(false);
      expect(withHalfWidth).toBeLessThan(1);
    }
  });

  test('is nothing for a record without running time, and nothing fails for one with hardly a point', () => {
    const idle = recordOf(
      96,
      15,
      { ...{ primarySupplyF: 50, secondaryReturnF: 50 }, secondaryFlowGpm: 0 },
      { unitStatus: [0, 0] },
    );
    for (const record of [recordOf(0, 15, {}), recordOf(96, 15, {}), idle]) {
      expect(furtherSensors(record, plantOf(), calibrateRecord(record, plantOf()))).toEqual([]);
    }
    const bare = recordOf(96, 15, { secondaryFlowGpm: 1000 }, { unitStatus: [1, 0] });
    const further = furtherSensors(bare, plantOf(), calibrateRecord(bare, plantOf()));
    for (const each of further) expect(Number.isFinite(each.withHalfWidth)).toBe(true);
  });

  test('does not write to the record or the calibration', () => {
    const { record } = exactLoop({ days: 1, channels: LOOP_TEMPERATURES });
    const calibration = calibrateRecord(record, plantOf());
    const before = structuredClone({ record, calibration });
    furtherSensors(record, plantOf(), calibration);
    expect({ record, calibration }).toEqual(before);
  });
});
