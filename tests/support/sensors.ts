import { sensorName } from '@/lib/client/sensor-words';
import type { Sensor, Sensors } from '@/lib/schemas/sensors';

type Triple = readonly [value: number, lo: number, hi: number];

/** A sensor of the answer; what is not given is as of a sensor that is fine. */
export function sensor(
  role: string,
  given: Partial<Pick<Sensor, 'points' | 'use' | 'tie' | 'stretches' | 'coverage' | 'unitIndex'>> & {
    offset?: Triple;
    gain?: Triple;
  },
): Sensor {
  const { offset, gain, ...rest } = given;
  return {
    role,
    unitIndex: 0,
    label: sensorName(role),
    points: [`EEC.${role}`],
    kind: offset ? 'offset' : gain ? 'gain' : null,
    offsetF: offset?.[0] ?? null,
    offsetLoF: offset?.[1] ?? null,
    offsetHiF: offset?.[2] ?? null,
    gainPercent: gain?.[0] ?? null,
    gainLoPercent: gain?.[1] ?? null,
    gainHiPercent: gain?.[2] ?? null,
    priorSigmaF: offset ? 0.5 : null,
    priorSigmaPercent: gain ? 3 : null,
    told: 0.9,
    tie: offset ? 'supplies-agree' : gain ? 'energy-balance' : 'none',
    evidenceHours: 200,
    evidence: '',
    noiseF: null,
    noisePercent: null,
    incrementF: 0.1,
    incrementGpm: null,
    stretches: [],
    coverage: 0.99,
    use: 'used',
    ...rest,
  };
}

/** A whole answer about a fortnight of July. */
export const sensorsAnswer = (
  sensors: readonly Sensor[],
  more: Partial<Record<keyof Sensors, unknown>> = {},
): Sensors =>
  ({
    from: '2026-07-13T04:00:00Z',
    to: '2026-07-27T04:00:00Z',
    stepMinutes: 5,
    calibration: {
      id: 3,
      firstDay: '2026-07-01',
      lastDay: '2026-07-31',
      intervals: 900,
      createdAt: '2026-07-27T05:00:00Z',
    },
    sensors: [...sensors],
    chiSquare: { median: 1.7, limit: 6, shareWithin: 0.981 },
    header: { side: 'absent', primaryProbability: null, sentence: null },
    limits: [],
    suspicions: [],
    furtherSensors: [],
    settingsRevision: 7,
    kernelVersion: '0.3.0',
    ...more,
  }) as Sensors;
