/** What a whole record says about its sensors. Plain data: it is stored as JSON beside the results that rest on it. */

/** Sensors whose lasting error is estimated. `ratedFlow` is the rated flow of running pumps that stands in for a meter. */
export const SENSOR_ROLES = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
  'bypassTemp',
  'primaryFlow',
  'secondaryFlow',
  'bypassFlow',
  'ratedFlow',
] as const;
export type SensorRole = (typeof SENSOR_ROLES)[number];

/** What ties a sensor to the others: the physics that told its error, or why nothing did. */
export type SensorTie =
  | 'supplies-agree' // clear forward flow: both supplies are one stream
  | 'returns-agree' // clear reverse flow: both returns are one stream
  | 'energy-balance' // load equals production over both tees
  | 'flow-balance' // primary less secondary is the bypass
  | 'spot-check' // a reference instrument was read beside it
  | 'none'; // nothing in the record bears on it

/** The likely lasting error of one sensor: what it reads too high. Offsets in deg F, gains in percent of reading. */
export interface SensorFinding {
  role: SensorRole;
  kind: 'offset' | 'gain';
  value: number;
  /** Central 90 % interval. */
  lo: number;
  hi: number;
  /** Standard uncertainty (k = 1) from the sensor's class alone, before the record. */
  prior: number;
  /** Share of the prior variance that the record took away, 0 to 1; near 0: the record cannot tell. */
  told: number;
  tie: SensorTie;
  /** Hours of record that the tie rests on. */
  evidenceHours: number;
  /** Noise of one interval (k = 1), deg F or percent, as seen in the record; NaN (null in JSON) when not seen. */
  noise: number;
  /** Least step between readings (resolution or change-of-value increment), deg F or gpm; 0 when none is seen. */
  increment: number;
}

/** A reference reading of one quantity at one instant, entered by a person. */
export interface SpotCheck {
  /** Index of the interval it falls in; may lie outside the record, then only the time counts. */
  slot: number;
  role: SensorRole;
  /** deg F or gpm. */
  reading: number;
  /** Standard uncertainty of the reference (k = 1), deg F or percent of reading. */
  sigma: number;
  /** What the plant's sensor showed then; NaN: taken from the record at `slot`. */
  shown: number;
}

/** What no record of this kind can tell: said, not guessed. */
export type CalibrationLimit =
  | 'common-offset' // an offset that all temperatures share
  | 'common-gain' // a gain that all flow meters share
  | 'span' // supplies against returns: fewer than two flows, so nothing but temperatures sizes what crosses over
  | 'one-way-only' // the common pipe ran one way all along: the other pair of temperatures is not tied
  | 'no-flow' // no flow at all: gpm cannot be told, only shares
  | 'too-short'; // too little running record: sensors are taken as their class says

/**
 * Lasting errors of a record's sensors with their covariance, and what one interval's reading scatters by.
 * `values` and `covariance` (row-major) run over the parameters of lib/hydronics/sensor-errors.ts: five offsets (F), gain and
 * zero of three meters (share of reading, of design flow), a gain and a supply offset for each set of units in `sets`.
 */
export interface Calibration {
  kernelVersion: string;
  /** Intervals that entered. */
  intervals: number;
  values: number[];
  covariance: number[];
  /** Running sets of units (bit i = unit i) whose rated flow has a gain of its own. */
  sets: number[];
  /** Noise of one interval (k = 1): deg F for the five temperatures, share of reading for the three flows. */
  noise: number[];
  /** Mean share of the main flow that crosses over, either way: the scale of the record's own prior. */
  shareScale: number;
  /** Share of the intervals in which the pipe ran both ways: the prior of a swing. */
  swingShare: number;
  /** What this plant's intervals depart from two ideal tees by, noise and lasting errors apart (k = 1). */
  misfit: { temperatureF: number; flowShare: number };
  /** Where the header sensor of unknown place sits, and the probability that it is the production side. */
  header: { side: 'primary' | 'secondary' | 'unknown' | 'absent'; primaryProbability: number };
  findings: SensorFinding[];
  limits: CalibrationLimit[];
  /** Median chi-square of the intervals, its 95 % limit for their redundancy, and the share within it. */
  chiSquare: { median: number; limit: number; shareWithin: number };
}

/** A stretch of one channel that must not be used, or is to be shown. Slots half-open. */
export interface SensorStretch {
  channel: string;
  /** 1-based; 0 for the loop's own points. */
  unitIndex: number;
  kind: 'stuck' | 'out-of-range' | 'spike' | 'missing';
  fromSlot: number;
  toSlot: number;
}

/** Something about the mapping that the record speaks against. */
export interface SensorSuspicion {
  kind: 'swapped' | 'wrong-unit';
  /** The channels concerned: two when swapped. */
  channels: string[];
  /** For `wrong-unit`: what the values look like, e.g. 'degC read as degF'. */
  looksLike: string;
  /** Share of the running intervals that say so. */
  share: number;
}

/** What one more point, or a better one, would do to this record. */
export interface FurtherSensor {
  role: SensorRole;
  kind: 'new' | 'better';
  /** Standard uncertainty it is supposed to have: deg F or percent. */
  sigma: number;
  /** Mean half-width of the 90 % interval of the bypass over the running intervals, gpm (share of main flow without a flow). */
  nowHalfWidth: number;
  withHalfWidth: number;
  unit: 'gpm' | 'share';
  /** Hours of the record whose direction is unknown, now and with it. */
  nowUnknownHours: number;
  withUnknownHours: number;
}
