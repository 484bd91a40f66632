import type { Cause } from '../hydronics/types';
import type { ReverseStretch } from './reverse-stretches';

/** A local clock hour in the mail's strip. */
export interface HourBar {
  startMs: number;
  /** Mean over the hour of the forward part, gpm, 0 or more. */
  forwardGpm: number;
  /** Mean over the hour of the backward part, gpm, a positive amount. */
  reverseGpm: number;
  /** What held most of its minutes; `no-data` when nothing is known of the hour, `off` when the plant did not run. */
  kind: 'forward' | 'reverse' | 'still' | 'unknown' | 'off' | 'no-data';
}

/** What happened at a plant on one local day, as far as the mail tells it. */
export interface DayFacts {
  plantName: string;
  organizationName: string;
  timeZone: string;
  /** Local day, YYYY-MM-DD. */
  day: string;
  reverseMinutes: number;
  stretches: readonly ReverseStretch[];
  further: { count: number; minutes: number };
  bridged: boolean;
  /** The interval with most backward flow; amounts are positive, lo and hi bound its central 90 % interval. */
  largest: { atMs: number; flowGpm: number; loGpm: number; hiGpm: number } | null;
  /** The interval with the warmest supply to the buildings while it ran backwards; NaN when production's is not known. */
  warmest: { atMs: number; supplyF: number; productionF: number } | null;
  hours: readonly HourBar[];
  lowHours: number;
  hoursInDay: number;
  excessCost: number | null;
  currency: string | null;
  excessEnergyKwh: number | null;
  /** The cause that stands behind most of the low hours' excess; null without low hours. */
  cause: Cause | null;
  /** Share of the day's data that arrived and passed, 0 to 1. */
  coverage: number | null;
  /** Flows at the interval of `largest`, and how many units ran in its hour; null when not known. */
  situation: {
    atMs: number;
    productionFlowGpm: number;
    buildingsFlowGpm: number;
    bypassFlowGpm: number;
    unitsRunning: number | null;
    mostUnitsRunning: number | null;
    units: number;
  } | null;
  /** Start of the hour to open first, epoch ms. */
  worstHourMs: number | null;
}

export interface DailyMailModel extends DayFacts {
  /** When the day was evaluated, not when a mail goes out: a second try must make the same mail. */
  evaluatedAtMs: number;
  rule: { minReverseMinutes: number; minReverseFlowGpm: number };
  links: { acknowledge: string; acknowledgeWithNote: string; worstHour: string | null; stop: string };
}

export interface DailyMail {
  subject: string;
  preheader: string;
  text: string;
  html: string;
}
