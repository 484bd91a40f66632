import { addLocalDays, localParts, startOfLocalDay } from '@/lib/client/format-time';
import type { DailyMailModel, HourBar } from '@/lib/mail/daily-mail-model';

const HOUR_MS = 3_600_000;
const ZONE = 'America/New_York';
const DAY = '2026-07-24';
/** Net bypass flow by hour, gpm; null is an hour at slack. */
const HOURS = [
  30,
  null,
  -17,
  null,
  null,
  30,
  -110,
  640,
  500,
  340,
  200,
  null,
  -290,
  -520,
  -700,
  -966,
  -780,
  -520,
  -210,
  40,
  270,
  480,
  660,
  -59,
];

const at = (hour: number, minute = 0) => startOfLocalDay(DAY, ZONE) + hour * HOUR_MS + minute * 60_000;

/** An invented day: a hospital's energy centre that ran backwards through a hot afternoon. */
export function ternQuay(changes: Partial<DailyMailModel> = {}): DailyMailModel {
  return {
    plantName: 'East energy centre',
    organizationName: 'Tern Quay Hospital campus',
    timeZone: ZONE,
    day: DAY,
    evaluatedAtMs: startOfLocalDay(addLocalDays(DAY, 1), ZONE) + 6.5 * HOUR_MS,
    reverseMinutes: 585,
    stretches: [
      { startMs: at(2, 15), endMs: at(3), reverseMinutes: 45, largestFlowGpm: 17.2, warmestSupplyF: 44.21 },
      { startMs: at(6), endMs: at(7), reverseMinutes: 60, largestFlowGpm: 110.4, warmestSupplyF: 45.36 },
      { startMs: at(12), endMs: at(19), reverseMinutes: 420, largestFlowGpm: 966.3, warmestSupplyF: 49.12 },
      { startMs: at(23), endMs: at(24), reverseMinutes: 60, largestFlowGpm: 58.8, warmestSupplyF: 44.74 },
    ],
    further: { count: 0, minutes: 0 },
    bridged: false,
    largest: { atMs: at(15, 5), flowGpm: 966.3, loGpm: 872.4, hiGpm: 1058.7 },
    warmest: { atMs: at(15, 10), supplyF: 49.12, productionF: 44.2 },
    hours: HOURS.map((net, hour) => bar(at(hour), net)),
    lowHours: 14,
    hoursInDay: 24,
    excessCost: 59.05,
    currency: 'USD',
    excessEnergyKwh: 421.8,
    cause: 'reverse-flow',
    coverage: 1,
    situation: {
      atMs: at(15, 5),
      productionFlowGpm: 1719.9,
      buildingsFlowGpm: 2686.2,
      bypassFlowGpm: -966.3,
      unitsRunning: 2,
      mostUnitsRunning: 2,
      units: 3,
    },
    worstHourMs: at(15),
    rule: { minReverseMinutes: 30, minReverseFlowGpm: 0 },
    links: {
      acknowledge: 'https://slackwater.example/a/7f3k',
      acknowledgeWithNote: 'https://slackwater.example/a/7f3k/note',
      worstHour: 'https://slackwater.example/plants/eec/hours/2026-07-24T19:00:00.000Z',
      stop: 'https://slackwater.example/a/7f3k/stop',
    },
    ...changes,
  };
}

function bar(startMs: number, net: number | null): HourBar {
  if (net === null) return { startMs, forwardGpm: 0, reverseGpm: 0, kind: 'still' };
  return {
    startMs,
    forwardGpm: Math.max(0, net),
    reverseGpm: Math.max(0, -net),
    kind: net < 0 ? 'reverse' : 'forward',
  };
}

/** The clock hour of an instant at the plant, for claims about the strip. */
export const clockHour = (ms: number): number => localParts(ms, ZONE).hour;
