import type { BoundFormat } from '@/components/shell/units-context';
import { errorWords, sensorError, sensorName } from '@/lib/client/sensor-words';
import { formatNumber, formatPercent } from '@/lib/client/format';
import type { Sensor, Sensors } from '@/lib/schemas/sensors';

/** How far zero lies outside a sensor's interval, in half-widths of it: which doubt comes first. */
function weight(sensor: Sensor): number {
  const error = sensorError(sensor);
  if (!error) return 0;
  const half = Math.max(1e-9, (error.hi - error.lo) / 2);
  return Math.abs(error.value) / half;
}

/** The sensors whose likely error leaves zero outside, the surest first. */
export const corrected = (sensors: readonly Sensor[]): Sensor[] =>
  sensors.filter((sensor) => sensor.use === 'corrected').sort((left, right) => weight(right) - weight(left));

const lower = (name: string): string => name.charAt(0).toLowerCase() + name.slice(1);

/** The finding: which sensor to doubt first, by how much, and what was done about it. */
export function sensorsLead({ sensors, suspicions, calibration, limits }: Sensors, print: BoundFormat): string {
  if (sensors.every((sensor) => sensor.points.length === 0)) return 'No sensor has been sent yet.';
  const [suspicion] = suspicions;
  if (suspicion) {
    const what = suspicion.kind === 'swapped' ? 'look exchanged' : 'looks as if its unit were another';
    return `Look at the mapping first: ${suspicion.sensors.map(lower).join(' and ')} ${what}.`;
  }
  if (!calibration) return 'The record of this period has not been worked out yet, so nothing is known of its sensors.';
  const [first, second, ...more] = corrected(sensors);
  const name = (sensor: Sensor) => lower(sensorName(sensor.role, sensor.unitIndex));
  const reads = (sensor: Sensor) => `reads ${errorWords(sensor.kind, sensorError(sensor)?.value ?? 0, print.units)}`;
  if (!first) {
    return limits.some(({ limit }) => limit === 'too-short')
      ? 'Too little running record to tell a sensor’s lasting error: each is taken as its class says.'
      : 'No sensor shows a lasting error: zero lies inside every interval.';
  }
  if (!second) {
    return `Doubt ${name(first)}: it ${reads(first)}. It is corrected in the answer and should be checked at the pipe.`;
  }
  const rest =
    more.length === 0 ? '' : ` ${formatNumber(more.length)} more ${more.length === 1 ? 'reads' : 'read'} off.`;
  const all = more.length === 0 ? 'Both' : 'All';
  return `Doubt ${name(first)} first: it ${reads(first)}. The ${name(second)} ${reads(second)}.${rest} ${all} are corrected in the answer and should be checked at the pipe.`;
}

/** What stands in the title block: whether the measurements fit together, and how many were corrected. */
export function sensorsBlock({ sensors, chiSquare, calibration }: Sensors): { term: string; value: string }[] {
  const known = sensors.filter((sensor) => sensor.kind !== null);
  const one = (value: number | null) => formatNumber(value, { decimals: 1 });
  return [
    ...(calibration && chiSquare.shareWithin !== null
      ? [
          { term: 'reconciled', value: `${formatPercent(chiSquare.shareWithin, 1)} % of intervals pass` },
          { term: 'chi-square', value: `median ${one(chiSquare.median)}, limit ${one(chiSquare.limit)}` },
        ]
      : []),
    {
      term: 'corrected',
      value: `${corrected(sensors).length} of ${known.length} ${known.length === 1 ? 'sensor' : 'sensors'}`,
    },
  ];
}

/** The least round figure that is not below `most`. */
export function roundReach(most: number, steps: readonly number[]): number {
  return steps.find((step) => step >= most) ?? Math.ceil(most);
}
