import { GROUNDS, type Ground, type OverviewPlant } from '../schemas/overview';
import { formatQuantity, unitLabel, withUnit, type UnitSystem } from './format';
import { formatClock, formatDay, localParts, startOfLocalDay } from './format-time';

/** What the order of the plants is decided by. */
export type PlantFacts = Pick<
  OverviewPlant,
  | 'name'
  | 'timeZone'
  | 'arrangement'
  | 'criticalLoads'
  | 'targetSupplyF'
  | 'lastDay'
  | 'days'
  | 'week'
  | 'dataThrough'
  | 'lastUpload'
>;

/** An hour of reverse flow in a week is more than one morning start. */
const REVERSE_MINUTES = 60;
/** Supply this much above its target reaches coils that can no longer dry the air (common practice, no source). */
const WARM_SUPPLY_F = 2;
/** Share of the running time of which the direction is not known. */
const DOUBT_SHARE = 0.1;
/** Causes that no one can do anything about first. */
const NOTHING_TO_DO: readonly (string | null)[] = ['light-load', 'none', null];

const warmBy = ({ week, targetSupplyF }: PlantFacts): number => (week.warmestSupplyF ?? -Infinity) - targetSupplyF;

/** Backwards beyond what the plant is built for: a building bridge blends by design, so only its supply can tell. */
function runsBackwards(facts: PlantFacts): boolean {
  if (facts.arrangement === 'building-bridge') return warmBy(facts) >= WARM_SUPPLY_F;
  return facts.week.reverseMinutes >= REVERSE_MINUTES || warmBy(facts) >= WARM_SUPPLY_F;
}

/** Nothing of yesterday has come in. */
const isSilent = ({ dataThrough, lastDay, timeZone }: PlantFacts): boolean =>
  dataThrough !== null && Date.parse(dataThrough) <= startOfLocalDay(lastDay, timeZone);

/** The ground on which a plant takes its place: reverse hours and warm supply, then cost, then doubt, then silence. */
export function groundOf(facts: PlantFacts): Ground {
  const { week } = facts;
  if (facts.dataThrough === null) return 'no-data';
  if (isSilent(facts)) return 'silence';
  if (runsBackwards(facts)) return 'reverse';
  const costs = (week.excessCost ?? week.excessEnergyKwh ?? 0) > 0;
  if (costs && week.lowHours > 0 && week.cause !== 'sensor-doubt' && !NOTHING_TO_DO.includes(week.cause)) return 'cost';
  if (week.cause === 'sensor-doubt' || week.unknownMinutes > DOUBT_SHARE * week.runningMinutes) return 'doubt';
  return 'calm';
}

/** Larger first within a ground. */
function weights(facts: PlantFacts, ground: Ground): number[] {
  const { week } = facts;
  const cost = week.excessCost ?? week.excessEnergyKwh ?? 0;
  switch (ground) {
    case 'reverse':
      // Where a hospital or laboratory hangs on the supply, it comes first.
      return [facts.criticalLoads.length > 0 ? 1 : 0, week.reverseMinutes, warmBy(facts)];
    case 'doubt':
      return [week.unknownMinutes, cost];
    case 'silence':
      return [Date.parse(facts.dataThrough ?? '')];
    default:
      return [cost, week.lowHours];
  }
}

/** The order "look at first": negative when `a` comes before `b`. */
export function compareAttention(a: PlantFacts, b: PlantFacts): number {
  const [groundA, groundB] = [groundOf(a), groundOf(b)];
  if (groundA !== groundB) return GROUNDS.indexOf(groundA) - GROUNDS.indexOf(groundB);
  const [weightsA, weightsB] = [weights(a, groundA), weights(b, groundB)];
  for (const [index, weight] of weightsA.entries()) {
    const difference = (weightsB[index] ?? 0) - weight;
    if (difference !== 0 && !Number.isNaN(difference)) return difference;
  }
  return a.name.localeCompare(b.name);
}

const PART_WORDS = {
  night: 'mostly at night',
  morning: 'mostly in the morning',
  afternoon: 'mostly in the afternoon',
  evening: 'mostly in the evening',
} as const;

const CAUSE_SENTENCES: Readonly<Record<string, string>> = {
  'reverse-flow': 'Return water in the supply makes coils take more flow',
  'surplus-production': 'More water is produced than the buildings take; the surplus crosses over',
  'coil-shortfall': 'The buildings need more water than their load explains',
  'valve-leakage': 'Water passes through coils without cooling anything',
  'warm-supply': 'Supply above its set-point opens the valves',
  'idle-unit-flow': 'Water through a stopped unit warms the supply',
};

const count = (number: number, one: string, many: string): string => `${number} ${number === 1 ? one : many}`;
const list = (words: readonly string[]): string =>
  words.length > 1 ? `${words.slice(0, -1).join(', ')} and ${words.at(-1) ?? ''}` : (words[0] ?? '');

/** Why the plant stands where it stands, in a sentence or two with its numbers; never a score. */
export function whyItStandsHere(facts: PlantFacts, units: UnitSystem = 'ip'): string {
  switch (groundOf(facts)) {
    case 'reverse':
      return reverseWords(facts, units);
    case 'cost':
      return `${CAUSE_SENTENCES[facts.week.cause ?? ''] ?? 'Delta-T is low'}, ${count(facts.week.lowHours, 'hour', 'hours')} of the week.`;
    case 'doubt':
      return doubtWords(facts);
    case 'silence':
      return `Nothing received since ${sinceWords(facts)}.${uploadWords(facts)}`;
    case 'no-data':
      return `No data yet.${uploadWords(facts)}`;
    default:
      return calmWords(facts);
  }
}

function reverseWords(facts: PlantFacts, units: UnitSystem): string {
  const { week, criticalLoads } = facts;
  const days =
    week.reverseDays === 0
      ? ''
      : week.reverseDays === 7
        ? 'Reverse every day'
        : `Reverse on ${count(week.reverseDays, 'day', 'days')} of seven`;
  const part = week.reversePart === null ? '' : `, ${PART_WORDS[week.reversePart]}`;
  const to = criticalLoads.length > 0 ? ` to ${list(criticalLoads.slice(0, 2))}` : '';
  const warmest =
    warmBy(facts) >= 0.5
      ? `Supply${to} reached ${withUnit(formatQuantity(week.warmestSupplyF, 'temperature', units), unitLabel('temperature', units))}.`
      : '';
  // A few minutes here and there add up to an hour without one such day.
  const reverse =
    days === '' ? (week.reverseMinutes >= REVERSE_MINUTES ? 'Reverse for short times.' : '') : `${days}${part}.`;
  return [reverse, warmest].filter((sentence) => sentence !== '').join(' ');
}

function doubtWords({ week }: PlantFacts): string {
  if (week.unknownMinutes <= DOUBT_SHARE * week.runningMinutes)
    return 'Sensors that contradict each other could change the verdict.';
  const unknown = Math.round(week.unknownMinutes / 60);
  return `Direction unknown in ${unknown} of ${count(Math.round(week.runningMinutes / 60), 'running hour', 'running hours')}.`;
}

function calmWords({ week }: PlantFacts): string {
  if (week.runningMinutes === 0) return 'Not running this week.';
  if (week.lowHours === 0 && week.stillMinutes > week.runningMinutes / 2)
    return 'At slack: in balance most of the week.';
  if (week.cause === 'light-load') return 'Light load; nothing to do first.';
  if (week.lowHours === 0) return 'No low delta-T hour this week.';
  return 'Nothing stands out this week.';
}

/** `Thu 14:00` within the last week, else `Thu 24 Jul 14:00`. */
function sinceWords({ dataThrough, timeZone, lastDay }: PlantFacts): string {
  const at = Date.parse(dataThrough ?? '');
  const recent = startOfLocalDay(lastDay, timeZone) - at < 6 * 86_400_000;
  const day = recent ? localParts(at, timeZone).weekday : formatDay(at, timeZone);
  return `${day} ${formatClock(at, timeZone)}`;
}

function uploadWords({ lastUpload }: PlantFacts): string {
  if (lastUpload?.status === 'needs-mapping') return ' The last upload waits for its columns to be named.';
  if (lastUpload?.status !== 'failed') return '';
  return lastUpload.problem === null ? ' The last upload failed.' : ` The last upload failed: ${lastUpload.problem}`;
}
