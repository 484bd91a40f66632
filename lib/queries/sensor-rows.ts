import { sensorEvidence } from '../client/sensor-words';
import type { UnitSystem } from '../client/format';
import type { Calibration, SensorFinding, SensorRole, SensorStretch } from '../hydronics/calibration-types';
import type { Arrangement, Measurements } from '../hydronics/types';
import { POINT_ROLE_NAMES, pointRole, type PointRoleName } from '../point-roles';
import type { Sensor } from '../schemas/sensors';
import { figure } from './figures';
import { apiInstant } from './period';
import { channelOf, ROLE_CHANNELS, roleOfChannel } from './sensor-channels';

/** A point of the plant with its own values over the record that was read. */
export interface SensorPoint {
  role: PointRoleName;
  unitIndex: number;
  sourceName: string;
  values: Float64Array;
}

/** What the rows are made of. Slots count from `startMs`; the period is the slots [firstSlot, endSlot). */
export interface SensorFacts {
  arrangement: Arrangement;
  points: readonly SensorPoint[];
  measurements: Measurements;
  stretches: readonly SensorStretch[];
  calibration: Calibration | null;
  startMs: number;
  firstSlot: number;
  endSlot: number;
  units: UnitSystem;
}

/** Sensors the estimate would use on any plant: they have a row even where nobody sends them. */
const WANTED: readonly PointRoleName[] = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
  'primaryFlow',
  'secondaryFlow',
];
/** The units' sensors that stand in where the main has none. */
const STAND_INS: Readonly<Partial<Record<PointRoleName, PointRoleName>>> = {
  primarySupplyTemp: 'unitLeavingTemp',
  primaryReturnTemp: 'unitEnteringTemp',
  primaryFlow: 'unitFlow',
};
/** Gaps shorter than this are counted in the coverage and not drawn: nobody sees five minutes in a fortnight. */
const SHORTEST_GAP_MINUTES = 60;
/** A sensor that flaps all the time is not drawn flap by flap. */
const MOST_STRETCHES = 500;

/**
 * One row a sensor, in the order of the roles: its likely lasting error with the evidence, its bad stretches and coverage within
 * the period, and what the answer did with it.
 */
export function sensorRows(facts: SensorFacts): Sensor[] {
  const wanted = facts.arrangement === 'primary-secondary' ? [...WANTED, 'bypassTemp' as const] : WANTED;
  const keys = new Map<string, { role: PointRoleName; unitIndex: number }>();
  for (const { role, unitIndex } of facts.points) keys.set(`${role}/${unitIndex}`, { role, unitIndex });
  for (const role of wanted) keys.set(`${role}/0`, { role, unitIndex: 0 });
  const places = [...keys.values()].sort(
    (left, right) =>
      POINT_ROLE_NAMES.indexOf(left.role) - POINT_ROLE_NAMES.indexOf(right.role) || left.unitIndex - right.unitIndex,
  );
  const rated = facts.calibration?.findings.find((finding) => finding.role === 'ratedFlow');
  return [
    ...places.map(({ role, unitIndex }) => sensorRow(facts, role, unitIndex)),
    ...(rated ? [ratedRow(facts, rated)] : []),
  ];
}

function sensorRow(facts: SensorFacts, role: PointRoleName, unitIndex: number): Sensor {
  const own = facts.points.filter((point) => point.role === role && point.unitIndex === unitIndex);
  const stretches = facts.stretches.filter(
    (stretch) =>
      roleOfChannel(stretch.channel) === role && stretch.unitIndex === unitIndex && stretch.kind !== 'missing',
  );
  const channel = channelOf(facts.measurements, role, unitIndex);
  const arrived = (slot: number) =>
    channel ? !Number.isNaN(channel[slot] ?? NaN) : own.some((point) => !Number.isNaN(point.values[slot] ?? NaN));
  const passed = own.length === 0 ? 0 : countPassed(facts, arrived, stretches);
  const length = facts.endSlot - facts.firstSlot;
  const finding = facts.calibration?.findings.find((each) => each.role === findingRole(role) && unitIndex === 0);
  const indexed = pointRole(role).indexed;
  // Without a point of its own the main is told from the units' sensors, and what is found is found of them together.
  const standIns = own.length > 0 || !finding ? [] : facts.points.filter((point) => point.role === STAND_INS[role]);
  const row: Sensor = {
    role,
    unitIndex,
    label: indexed ? `${pointRole(role).label} ${unitIndex}` : pointRole(role).label,
    points: [...own, ...standIns].map((point) => point.sourceName),
    ...errorOf(own.length > 0 || standIns.length > 0 ? finding : undefined),
    evidence: '',
    stretches: own.length === 0 ? [] : drawn(facts, [...stretches, ...gaps(facts, arrived)]),
    coverage: own.length === 0 || length <= 0 ? null : figure(passed / length),
    use: useOf(role, passed > 0 || standIns.length > 0, finding, facts.calibration),
  };
  return { ...row, evidence: sensorEvidence(row, facts.units) };
}

/** The rated flow that stands in for a meter is no sensor, and has a gain all the same. */
function ratedRow(facts: SensorFacts, finding: SensorFinding): Sensor {
  const row: Sensor = {
    role: 'ratedFlow',
    unitIndex: 0,
    label: 'rated flow of the pumps that run',
    points: [],
    ...errorOf(finding),
    evidence: '',
    stretches: [],
    coverage: null,
    use: isCorrected(finding) ? 'corrected' : 'used',
  };
  return { ...row, evidence: sensorEvidence(row, facts.units) };
}

/** The calibration knows one bypass meter, whether it tells the direction or not. */
const findingRole = (role: PointRoleName): SensorRole =>
  (role === 'bypassFlowUnsigned' ? 'bypassFlow' : role) as SensorRole;

const isCorrected = ({ lo, hi }: SensorFinding): boolean => lo > 0 || hi < 0;

function useOf(
  role: PointRoleName,
  passes: boolean,
  finding: SensorFinding | undefined,
  calibration: Calibration | null,
): Sensor['use'] {
  if (role === 'headerSupplyTemp') {
    const side = calibration?.header.side;
    return passes && (side === 'primary' || side === 'secondary') ? 'used' : 'left out';
  }
  if (!passes) return 'left out';
  if (ROLE_CHANNELS[role] === undefined || role === 'outdoorTemp') return 'shown only';
  return finding && isCorrected(finding) ? 'corrected' : 'used';
}

type ErrorFigures = Omit<
  Sensor,
  'role' | 'unitIndex' | 'label' | 'points' | 'evidence' | 'stretches' | 'coverage' | 'use'
>;

function errorOf(finding: SensorFinding | undefined): ErrorFigures {
  const of = (kind: SensorFinding['kind'], value: number | undefined) =>
    finding?.kind === kind ? figure(value) : null;
  return {
    kind: finding?.kind ?? null,
    offsetF: of('offset', finding?.value),
    offsetLoF: of('offset', finding?.lo),
    offsetHiF: of('offset', finding?.hi),
    gainPercent: of('gain', finding?.value),
    gainLoPercent: of('gain', finding?.lo),
    gainHiPercent: of('gain', finding?.hi),
    priorSigmaF: of('offset', finding?.prior),
    priorSigmaPercent: of('gain', finding?.prior),
    told: figure(finding?.told),
    tie: finding?.tie ?? 'none',
    evidenceHours: figure(finding?.evidenceHours),
    noiseF: of('offset', finding?.noise),
    noisePercent: of('gain', finding?.noise),
    incrementF: of('offset', finding?.increment),
    incrementGpm: of('gain', finding?.increment),
  };
}

function countPassed(
  { firstSlot, endSlot }: SensorFacts,
  arrived: (slot: number) => boolean,
  bad: readonly SensorStretch[],
): number {
  const failed = new Uint8Array(endSlot);
  for (const { fromSlot, toSlot } of bad) failed.fill(1, Math.max(0, fromSlot), Math.max(0, toSlot));
  let count = 0;
  for (let slot = firstSlot; slot < endSlot; slot += 1) if (arrived(slot) && failed[slot] === 0) count += 1;
  return count;
}

type Stretch = Pick<SensorStretch, 'kind' | 'fromSlot' | 'toSlot'>;

function gaps({ firstSlot, endSlot, measurements }: SensorFacts, arrived: (slot: number) => boolean): Stretch[] {
  const found: Stretch[] = [];
  const least = SHORTEST_GAP_MINUTES / measurements.stepMinutes;
  let from = -1;
  for (let slot = firstSlot; slot <= endSlot; slot += 1) {
    const there = slot === endSlot || arrived(slot);
    if (!there && from < 0) from = slot;
    if (there && from >= 0) {
      if (slot - from >= least) found.push({ kind: 'missing', fromSlot: from, toSlot: slot });
      from = -1;
    }
  }
  return found;
}

/** The stretches within the period, as instants, in order of time; of very many the longest. */
function drawn({ firstSlot, endSlot, startMs, measurements }: SensorFacts, stretches: readonly Stretch[]) {
  const instant = (slot: number) => apiInstant(startMs + slot * measurements.stepMinutes * 60_000);
  return stretches
    .map(({ kind, fromSlot, toSlot }) => ({
      kind,
      fromSlot: Math.max(firstSlot, fromSlot),
      toSlot: Math.min(endSlot, toSlot),
    }))
    .filter(({ fromSlot, toSlot }) => fromSlot < toSlot)
    .sort((left, right) => right.toSlot - right.fromSlot - (left.toSlot - left.fromSlot))
    .slice(0, MOST_STRETCHES)
    .sort((left, right) => left.fromSlot - right.fromSlot)
    .map(({ kind, fromSlot, toSlot }) => ({ kind, from: instant(fromSlot), to: instant(toSlot) }));
}
