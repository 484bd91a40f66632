import { z } from 'zod';
import { SENSOR_ROLES } from '../hydronics/calibration-types';
import { listOf, Paging, Period, UnitSystem } from './common';

const Figure = z.number().nullable();
const units = { units: UnitSystem.default('ip') };

export const SensorsQuery = Period.extend(units);

export const SENSOR_USES = ['used', 'corrected', 'shown only', 'left out'] as const;
export const STRETCH_KINDS = ['stuck', 'out-of-range', 'spike', 'missing'] as const;
export const SENSOR_TIES = [
  'supplies-agree',
  'returns-agree',
  'energy-balance',
  'flow-balance',
  'spot-check',
  'none',
] as const;
export const CALIBRATION_LIMITS = [
  'common-offset',
  'common-gain',
  'span',
  'one-way-only',
  'no-flow',
  'too-short',
] as const;

/** A stretch in which a sensor must not be believed, or said nothing; half-open. */
export const SensorStretch = z.object({ kind: z.enum(STRETCH_KINDS), from: z.string(), to: z.string() });

/** One sensor of the plant, or one that the estimate would use and nobody sends. */
export const Sensor = z.object({
  role: z.string(),
  unitIndex: z.number().int(),
  label: z.string(),
  /** Names of the columns that feed it; none: it was never sent. */
  points: z.array(z.string()),
  /** What kind of lasting error is looked for: what it reads too high, in degrees or in percent of reading. */
  kind: z.enum(['offset', 'gain']).nullable(),
  offsetF: Figure,
  offsetLoF: Figure,
  offsetHiF: Figure,
  gainPercent: Figure,
  gainLoPercent: Figure,
  gainHiPercent: Figure,
  /** Standard uncertainty (k = 1) that its class alone gives. */
  priorSigmaF: Figure,
  priorSigmaPercent: Figure,
  /** Share of that uncertainty's variance that the record took away, 0 to 1. */
  told: Figure,
  tie: z.enum(SENSOR_TIES),
  evidenceHours: Figure,
  /** The evidence in a sentence. */
  evidence: z.string(),
  /** Scatter of one interval (k = 1). */
  noiseF: Figure,
  noisePercent: Figure,
  /** Least step between two readings; 0 when none is seen. */
  incrementF: Figure,
  incrementGpm: Figure,
  stretches: z.array(SensorStretch),
  /** Share of the period's intervals whose value arrived and passed the checks, 0 to 1. */
  coverage: Figure,
  use: z.enum(SENSOR_USES),
});
export type Sensor = z.infer<typeof Sensor>;

/** What one more point, or a better sensor in its place, would do to this record. */
export const FurtherSensor = z.object({
  role: z.enum(SENSOR_ROLES),
  label: z.string(),
  kind: z.enum(['new', 'better']),
  why: z.string(),
  effort: z.string(),
  sigmaF: Figure,
  sigmaPercent: Figure,
  /** Mean half-width of the bypass flow's 90 % interval, now and with it; as shares of the main flow where no flow is known. */
  nowHalfWidthGpm: Figure,
  withHalfWidthGpm: Figure,
  nowHalfWidthShare: Figure,
  withHalfWidthShare: Figure,
  nowUnknownHours: z.number(),
  withUnknownHours: z.number(),
});
export type FurtherSensor = z.infer<typeof FurtherSensor>;

export const Sensors = z.object({
  from: z.string(),
  to: z.string(),
  stepMinutes: z.number(),
  /** The calibration in force on most days of the period; null: none has been fitted. */
  calibration: z
    .object({
      id: z.number().int(),
      /** The calendar month (UTC days, both included) it is in force for. */
      firstDay: z.string(),
      lastDay: z.string(),
      /** Intervals that entered. */
      intervals: z.number().int(),
      createdAt: z.string(),
    })
    .nullable(),
  sensors: z.array(Sensor),
  /** Whether the measurements can be reconciled at all: the chi-square of the intervals against its 95 % limit. */
  chiSquare: z.object({ median: Figure, limit: Figure, shareWithin: Figure }),
  header: z.object({
    side: z.enum(['primary', 'secondary', 'unknown', 'absent']),
    primaryProbability: Figure,
    sentence: z.string().nullable(),
  }),
  /** What no record of this kind can tell. */
  limits: z.array(z.object({ limit: z.enum(CALIBRATION_LIMITS), sentence: z.string() })),
  /** What the record says against the mapping. */
  suspicions: z.array(
    z.object({
      kind: z.enum(['swapped', 'wrong-unit']),
      sensors: z.array(z.string()),
      looksLike: z.string(),
      share: z.number(),
      sentence: z.string(),
    }),
  ),
  /** Best first. */
  furtherSensors: z.array(FurtherSensor),
  settingsRevision: z.number().int(),
  kernelVersion: z.string(),
});
export type Sensors = z.infer<typeof Sensors>;

const isFlow = (role: string): boolean => role.endsWith('Flow');
const reading = z.number().min(-200_000).max(200_000);

/**
 * A reading of a reference instrument beside one of the plant's sensors: `readingF` for a temperature, `readingGpm` for a flow
 * (bypass positive forward). `shown...` is what the plant's own sensor showed; left out, the record is asked.
 */
export const CreateSpotCheck = z
  .object({
    at: z.iso.datetime({ offset: true, error: 'Give the time of the reading, such as 2026-07-24T15:10:00Z.' }),
    role: z.enum(SENSOR_ROLES, 'Choose what was read.'),
    readingF: z
      .number()
      .min(20, 'Chilled water lies between 20 and 120 °F: check the unit of the reading.')
      .max(120, 'Chilled water lies between 20 and 120 °F: check the unit of the reading.')
      .optional(),
    readingGpm: reading.optional(),
    shownF: z.number().min(-100).max(300).nullable().optional(),
    shownGpm: reading.nullable().optional(),
    sigmaF: z
      .number()
      .min(0.005, 'Give the reference’s standard uncertainty: 0.1 °F is usual for a good thermometer.')
      .max(5, 'A reference this uncertain tells nothing: give at most 5 °F.')
      .optional(),
    sigmaPercent: z
      .number()
      .min(0.05, 'Give the reference’s standard uncertainty: 2 % is usual for a clamp-on meter.')
      .max(30, 'A reference this uncertain tells nothing: give at most 30 %.')
      .optional(),
    instrument: z.string().trim().max(120, 'Keep the instrument’s name under 120 characters.').default(''),
    note: z.string().trim().max(1000, 'Keep the note under 1,000 characters.').default(''),
  })
  .superRefine((check, context) => {
    const flow = isFlow(check.role);
    const issue = (path: string, message: string) => context.addIssue({ code: 'custom', path: [path], message });
    if (flow && check.readingGpm === undefined) issue('readingGpm', 'Give the flow that the reference showed, in gpm.');
    if (!flow && check.readingF === undefined)
      issue('readingF', 'Give the temperature that the reference showed, in °F.');
    if (flow && check.role !== 'bypassFlow' && check.readingGpm !== undefined && check.readingGpm <= 0)
      issue('readingGpm', 'A check at no flow tells nothing about the gain: read it while water flows.');
    if (check.role === 'bypassFlow' && check.readingGpm === 0)
      issue('readingGpm', 'A check at no flow tells nothing about the gain: read it while water flows.');
    const other = flow
      ? (['readingF', 'shownF', 'sigmaF'] as const)
      : (['readingGpm', 'shownGpm', 'sigmaPercent'] as const);
    for (const name of other)
      if (check[name] !== undefined) issue(name, `Leave this out: ${flow ? 'a flow' : 'a temperature'} was read.`);
  });
export type CreateSpotCheck = z.output<typeof CreateSpotCheck>;

export const SpotCheck = z.object({
  id: z.uuid(),
  at: z.string(),
  role: z.enum(SENSOR_ROLES),
  unitIndex: z.number().int(),
  label: z.string(),
  readingF: Figure,
  readingGpm: Figure,
  /** What the plant's sensor showed: as entered, else as the record holds it; null: nothing says. */
  shownF: Figure,
  shownGpm: Figure,
  shownFrom: z.enum(['entered', 'record', 'nowhere']),
  sigmaF: Figure,
  sigmaPercent: Figure,
  instrument: z.string(),
  note: z.string(),
  createdBy: z.string().nullable(),
  createdAt: z.string(),
});
export type SpotCheck = z.infer<typeof SpotCheck>;
export const SpotChecks = listOf(SpotCheck);
/** The check, and the analysis that it began; null when the plant has no record yet. */
export const SpotCheckMade = SpotCheck.extend({ analysisId: z.uuid().nullable() });

/** The analysis that a removal began. */
export const SpotCheckRemoved = z.object({ analysisId: z.uuid().nullable() });

export const SpotChecksQuery = Paging.extend(units);
export const SpotCheckParams = z.object({ plantId: z.uuid(), spotCheckId: z.uuid() });
