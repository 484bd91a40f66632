import type { SensorRole } from '../hydronics/calibration-types';
import { POINT_ROLES, type PointRoleName } from '../point-roles';
import type { Sensor, Sensors } from '../schemas/sensors';
import {
  formatDeltaT,
  formatNumber,
  formatPercent,
  formatPlusMinus,
  NO_BREAK_SPACE,
  unitLabel,
  withUnit,
  type UnitSystem,
} from './format';

/** What the sensors' numbers mean, in sentences; the API and the page tell them alike. */

const NAMES: Readonly<Record<SensorRole | 'headerSupplyTemp' | 'outdoorTemp', string>> = {
  primarySupplyTemp: 'Primary supply',
  primaryReturnTemp: 'Primary return',
  secondarySupplyTemp: 'Secondary supply',
  secondaryReturnTemp: 'Secondary return',
  bypassTemp: 'Bypass temperature',
  primaryFlow: 'Primary flow',
  secondaryFlow: 'Secondary flow',
  bypassFlow: 'Bypass flow',
  ratedFlow: 'Rated flow of the pumps that run',
  headerSupplyTemp: 'Header supply',
  outdoorTemp: 'Outdoor',
};

/** A sensor as pages name it: `Secondary supply`, `Unit flow 2`. */
export function sensorName(role: string, unitIndex = 0): string {
  const name = (NAMES as Partial<Record<string, string>>)[role];
  if (name !== undefined) return name;
  const label = (POINT_ROLES as Partial<Record<string, { label: string }>>)[role as PointRoleName]?.label ?? role;
  const capital = label.charAt(0).toUpperCase() + label.slice(1);
  return unitIndex > 0 ? `${capital} ${unitIndex}` : capital;
}

/** Half the width of a central 90 % interval in standard uncertainties. */
const NINETY_PERCENT = 1.6449;
/** Below this share of the prior's variance taken away the record says hardly anything. */
const HARDLY_TOLD = 0.1;

type Error = Pick<
  Sensor,
  'kind' | 'offsetF' | 'offsetLoF' | 'offsetHiF' | 'gainPercent' | 'gainLoPercent' | 'gainHiPercent'
>;

/** The likely lasting error in the sensor's own unit, stored as deg F or percent; null where none is looked for. */
export function sensorError(sensor: Error): { value: number; lo: number; hi: number } | null {
  const [value, lo, hi] =
    sensor.kind === 'gain'
      ? [sensor.gainPercent, sensor.gainLoPercent, sensor.gainHiPercent]
      : [sensor.offsetF, sensor.offsetLoF, sensor.offsetHiF];
  return value === null || lo === null || hi === null ? null : { value, lo, hi };
}

/** `0.6 °F`, `2.1 %`: the size of an error, without its sign. */
export function errorSize(kind: Sensor['kind'], value: number, units: UnitSystem): string {
  const size = Math.abs(value);
  return kind === 'gain'
    ? `${formatNumber(size, { decimals: 1 })}${NO_BREAK_SPACE}%`
    : withUnit(formatDeltaT(size, units), unitLabel('temperatureDifference', units));
}

/** `0.6 °F warm`, `2.1 % low`: an error in words. */
export function errorWords(kind: Sensor['kind'], value: number, units: UnitSystem): string {
  const side = kind === 'gain' ? (value > 0 ? 'high' : 'low') : value > 0 ? 'warm' : 'cold';
  return `${errorSize(kind, value, units)} ${side}`;
}

/** `0.6 ±0.2 °F warm`. */
function errorWithReach(
  kind: Sensor['kind'],
  { value, lo, hi }: { value: number; lo: number; hi: number },
  units: UnitSystem,
) {
  const half = (hi - lo) / 2;
  const side = kind === 'gain' ? (value > 0 ? 'high' : 'low') : value > 0 ? 'warm' : 'cold';
  if (kind === 'gain') {
    const figure = (size: number) => formatNumber(size, { decimals: 1 });
    return `${figure(Math.abs(value))}${NO_BREAK_SPACE}±${figure(half)}${NO_BREAK_SPACE}% ${side}`;
  }
  const reach = formatPlusMinus(half, 'temperatureDifference', units);
  return `${withUnit(`${formatDeltaT(Math.abs(value), units)}${NO_BREAK_SPACE}${reach}`, unitLabel('temperatureDifference', units))} ${side}`;
}

const hours = (count: number | null): string => {
  const whole = formatNumber(count);
  return `${whole} ${whole === '1' ? 'hour' : 'hours'}`;
};

function tieWords(sensor: Sensor): string {
  const over = hours(sensor.evidenceHours);
  switch (sensor.tie) {
    case 'supplies-agree':
      return `In ${over} of clear forward flow the two supplies must agree`;
    case 'returns-agree':
      return `In ${over} of clear reverse flow the two returns must agree`;
    case 'energy-balance':
      return `Over ${over} load must equal production over both tees`;
    case 'flow-balance':
      return `Over ${over} primary less secondary flow must be what the common pipe carries`;
    case 'spot-check':
      return 'A reference instrument was read beside it';
    case 'none':
      return 'Nothing in the record bears on it';
  }
}

/** What a point that no balance ties is there for. */
const PART_PLAYED: Readonly<Partial<Record<string, string>>> = {
  unitStatus: 'Tells the plant’s state and, with no meter, the flow.',
  primaryPumpStatus: 'Tells the plant’s state and, with no meter, the flow.',
  unitPower: 'Tells the plant’s state.',
  unitLeavingTemp: 'Stands in where the header’s own sensor is silent.',
  unitEnteringTemp: 'Stands in where the header’s own sensor is silent.',
  unitFlow: 'Adds up to production flow where the main has no meter.',
  distributionPumpPower: 'Tells what the pumps cost; no second measurement to compare with.',
  plantPower: 'Tells what the plant costs; no second measurement to compare with.',
  supplySetpoint: 'What production supply is compared with.',
};

/** What of a sensor's readings did not pass in the period; empty when all did. */
function badStretches(sensor: Sensor): string {
  const total = (kind: Sensor['stretches'][number]['kind']) =>
    sensor.stretches
      .filter((each) => each.kind === kind)
      .reduce((sum, each) => sum + (Date.parse(each.to) - Date.parse(each.from)) / 3_600_000, 0);
  const parts = (['stuck', 'out-of-range', 'spike'] as const).flatMap((kind) => {
    const length = total(kind);
    if (length === 0) return [];
    const long =
      length < 1 ? `${formatNumber(length * 60)}${NO_BREAK_SPACE}min` : `${formatNumber(length)}${NO_BREAK_SPACE}h`;
    const what = { stuck: 'stuck', 'out-of-range': 'out of range', spike: 'single spikes' }[kind];
    return [`${what} ${long}`];
  });
  if (parts.length === 0) return '';
  const text = parts.join(', ');
  return ` ${text.charAt(0).toUpperCase()}${text.slice(1)} in this period, left out.`;
}

/** The evidence behind a sensor's likely error, in a sentence with numbers. */
export function sensorEvidence(sensor: Sensor, units: UnitSystem): string {
  const bad = badStretches(sensor);
  if (sensor.points.length === 0 && sensor.kind === null) return 'Never sent.';
  if (sensor.use === 'left out') return `Nothing that passed the checks arrived in this period.${bad}`;
  if (sensor.use === 'shown only') return 'Does not enter the balance.';
  const error = sensorError(sensor);
  if (!error) return `${PART_PLAYED[sensor.role] ?? 'No second measurement to compare with.'}${bad}`;
  if (sensor.tie === 'none') {
    const reach = NINETY_PERCENT * ((sensor.kind === 'gain' ? sensor.priorSigmaPercent : sensor.priorSigmaF) ?? 0);
    return `Nothing in the record bears on it: taken as its class says, within ${errorSize(sensor.kind, reach, units)}.${bad}`;
  }
  const says =
    error.lo > 0 || error.hi < 0
      ? `it reads ${errorWithReach(sensor.kind, error, units)}`
      : `${sensor.tie === 'supplies-agree' || sensor.tie === 'returns-agree' ? 'they do' : 'it does'}, within ${errorSize(sensor.kind, Math.max(-error.lo, error.hi), units)}`;
  const hardly = sensor.told !== null && sensor.told < HARDLY_TOLD ? ' The record hardly tells.' : '';
  return `${tieWords(sensor)}: ${says}.${hardly}${bad}`;
}

/** What no record of this kind can tell, and what would. */
export function limitSentence(limit: Sensors['limits'][number]['limit']): string {
  switch (limit) {
    case 'common-offset':
      return 'An offset that all temperatures share. A reference thermometer at one of them, entered as a spot check, settles it.';
    case 'common-gain':
      return 'A gain that all flow meters share. A reference meter on one main, entered as a spot check, settles it.';
    case 'span':
      return 'An error of the supplies against the returns: with fewer than two flows, nothing but the temperatures themselves says how much crosses over. A second flow, or spot checks of one supply and one return, settles it.';
    case 'one-way-only':
      return 'The common pipe ran one way all along, so the other pair of temperatures was never one stream. A spot check of both settles it.';
    case 'no-flow':
      return 'How many gpm flowed: no flow is measured and none can be inferred, so flows are shares of the main. A pump status or one meter settles it.';
    case 'too-short':
      return 'Hardly anything: there is too little running record, so sensors are taken as their class says. A week of running tells much more.';
  }
}

/** A suspicion about the mapping in a sentence that says what to do. */
export function suspicionSentence(
  suspicion: { kind: 'swapped' | 'wrong-unit'; looksLike: string; share: number },
  names: readonly string[],
): string {
  const share = `${formatPercent(suspicion.share)}${NO_BREAK_SPACE}% of the running intervals`;
  if (suspicion.kind === 'swapped') {
    return `${names.join(' and ')} look exchanged in ${share} (${suspicion.looksLike}). Exchange the two in the file’s mapping and send it again; if the mapping is right, look at the wires.`;
  }
  const [shown = '', taken = ''] = suspicion.looksLike.split(' read as ');
  const what = taken === '' ? suspicion.looksLike : `values in ${unitWords(shown)} read as ${unitWords(taken)}`;
  return `${names.join(' and ')} looks like ${what} in ${share}. Set its unit in the file’s mapping and send it again.`;
}

const UNIT_WORDS: Readonly<Partial<Record<string, string>>> = { degC: '°C', degF: '°F', 'm3/h': 'm³/h' };
const unitWords = (unit: string): string => UNIT_WORDS[unit] ?? unit;

/** Where the header sensor of unknown place sits; null where there is none. */
export function headerSentence(header: {
  side: Sensors['header']['side'];
  primaryProbability: number | null;
}): string | null {
  const sure = (probability: number | null) =>
    probability === null ? '' : ` (probability ${formatNumber(Math.min(0.99, probability), { decimals: 2 })})`;
  const { side, primaryProbability } = header;
  switch (side) {
    case 'primary':
      return `The header sensor sits on the production side of the supply tee${sure(primaryProbability)}.`;
    case 'secondary':
      return `The header sensor sits on the distribution side of the supply tee${sure(primaryProbability === null ? null : 1 - primaryProbability)}.`;
    case 'unknown':
      return 'On which side of the supply tee the header sensor sits, the record does not tell. Look at the pipe, then map it as primary or secondary supply.';
    case 'absent':
      return null;
  }
}

interface Further {
  why: string;
  effort: string;
}
const NEW: Readonly<Record<SensorRole, Further>> = {
  bypassTemp: {
    why: 'In the middle of the common pipe, one sensor. Tells the direction by itself.',
    effort: 'an hour’s work',
  },
  primarySupplyTemp: { why: 'Before the supply tee: what production makes.', effort: 'an hour’s work' },
  secondarySupplyTemp: { why: 'Behind the supply tee: what the buildings are sent.', effort: 'an hour’s work' },
  secondaryReturnTemp: { why: 'Before the return tee: what the buildings send back.', effort: 'an hour’s work' },
  primaryReturnTemp: { why: 'Behind the return tee: what production gets back.', effort: 'an hour’s work' },
  primaryFlow: { why: 'In the production main, on a straight run.', effort: 'a meter to fit' },
  secondaryFlow: { why: 'In the distribution main, on a straight run.', effort: 'a meter to fit' },
  bypassFlow: { why: 'In the common pipe, of a kind that knows both directions.', effort: 'a meter to fit' },
  ratedFlow: { why: 'The primary pumps’ status: rated flow stands in for a meter.', effort: 'a trend to add' },
};

/** Why a further sensor helps and what it takes. */
export function furtherWords(role: SensorRole, kind: 'new' | 'better'): Further {
  if (kind === 'new') return NEW[role];
  return role.endsWith('Temp')
    ? { why: 'The one that is there, checked against a reference or replaced.', effort: 'an hour’s work' }
    : { why: 'The one that is there, checked against a reference or replaced.', effort: 'a calibration visit' };
}

/** A further sensor as the list names it. */
export const furtherName = (role: SensorRole, kind: 'new' | 'better'): string =>
  kind === 'new' ? (role === 'ratedFlow' ? 'Primary pump status' : sensorName(role)) : `${sensorName(role)}, better`;
