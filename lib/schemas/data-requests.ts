import { z } from 'zod';
import { CAUSES } from '../hydronics/types';
import { LocalDay, Moment, Paging, Period, UnitSystem } from './common';
import { STEP_MINUTES } from './plant';

/** Queries, parameters and answers of the routes that read a plant's record, beside those of results.ts. */

const units = { units: UnitSystem.default('ip') };

export const UploadQuery = z.object({ filename: z.string().max(1000).optional() });
export const UploadAccepted = z.object({ id: z.uuid(), status: z.literal('received') });
export const AnalysisParams = z.object({ plantId: z.uuid(), analysisId: z.uuid() });
export const StartAnalysis = z.object({ from: Moment.optional(), to: Moment.optional() });
export const AnalysisStarted = z.object({ id: z.uuid() });

export const TideQuery = Period.extend({
  /** Minutes a bar stands for; chosen from the period when absent. */
  barMinutes: z.coerce.number().int().min(1).max(10_080).optional(),
  ...units,
});

/** The hour's start as it stands in a path, where its colons and its plus may be escaped. */
export const HourPathParams = z.object({
  plantId: z.uuid(),
  hourStart: z
    .string()
    .transform((text) => {
      try {
        return decodeURIComponent(text);
      } catch {
        return text;
      }
    })
    .pipe(z.iso.datetime({ offset: true })),
});

/** `from` and `to` narrow only the rank: without them it is among all the plant's low hours. */
export const HourQuery = Period.extend(units);

export const DaysQuery = Period.extend({
  limit: z.coerce.number().int().min(1).max(500).default(500),
  cursor: z.string().max(400).optional(),
  ...units,
});

export const EpisodesQuery = Period.extend({
  ...Paging.shape,
  cause: z.enum(CAUSES).optional(),
  /** `true`: only those nobody has acknowledged. */
  open: z.stringbool().default(false),
  ...units,
});

export const CoverageQuery = Period;
export const Coverage = z.object({
  from: z.string(),
  to: z.string(),
  stepMinutes: z.union(STEP_MINUTES.map((step) => z.literal(step))),
  /** Local days of the plant, in order. */
  days: z.array(LocalDay),
  points: z.array(
    z.object({
      role: z.string(),
      /** 0 for roles that belong to no unit. */
      unitIndex: z.number().int(),
      ordinal: z.number().int(),
      label: z.string(),
      sourceName: z.string(),
      /** Share of each day's intervals that hold a value, 0 to 1. */
      shares: z.array(z.number()),
      /** The same over the whole period. */
      share: z.number(),
    }),
  ),
});
export type Coverage = z.infer<typeof Coverage>;
