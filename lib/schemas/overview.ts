import { z } from 'zod';
import { CAUSES } from '../hydronics/types';
import { Paging, UnitSystem } from './common';
import { ARRANGEMENTS } from './plant';
import { PlantDay, TideBar } from './results';
import { UPLOAD_STATUSES } from './upload';

const Figure = z.number().nullable();

export const OverviewQuery = Paging.extend({ units: UnitSystem.default('ip') });

/** Why a plant stands where it stands among the others, from the first to be looked at to the last. */
export const GROUNDS = ['reverse', 'cost', 'doubt', 'calm', 'silence', 'no-data'] as const;
export type Ground = (typeof GROUNDS)[number];
export const DAY_PARTS = ['night', 'morning', 'afternoon', 'evening'] as const;

/** Sums over the seven local days that end with yesterday, each plant's own. */
export const OverviewWeek = z.object({
  reverseMinutes: z.number(),
  unknownMinutes: z.number(),
  stillMinutes: z.number(),
  runningMinutes: z.number(),
  /** Days with half an hour of reverse flow or more. */
  reverseDays: z.number().int(),
  /** Six hours of the day that hold more than half of the reverse minutes: from 0:00, 6:00, 12:00, 18:00. */
  reversePart: z.enum(DAY_PARTS).nullable(),
  largestReverseFlowGpm: Figure,
  warmestSupplyF: Figure,
  lowHours: z.number().int(),
  /** Weighted by flow, so that they agree with tons over flow. */
  deltaTF: Figure,
  productionDeltaTF: Figure,
  excessCost: Figure,
  excessEnergyKwh: Figure,
  /** The cause behind most of the excess. */
  cause: z.enum(CAUSES).nullable(),
});
export type OverviewWeek = z.infer<typeof OverviewWeek>;

export const OverviewPlant = z.object({
  id: z.uuid(),
  organizationId: z.uuid(),
  organizationName: z.string(),
  name: z.string(),
  timeZone: z.string(),
  arrangement: z.enum(ARRANGEMENTS),
  currency: z.string().nullable(),
  criticalLoads: z.array(z.string()),
  /** What the strip is scaled by. */
  designFlowGpm: z.number(),
  /** What supply to the buildings is meant to be: the production set-point, or the blend of a building bridge. */
  targetSupplyF: z.number(),
  firstDay: z.string(),
  /** Yesterday at the plant. */
  lastDay: z.string(),
  /** Those of the seven days of which something is known. */
  days: z.array(PlantDay),
  yesterday: PlantDay.nullable(),
  week: OverviewWeek,
  /** One bar a local clock hour, for the small strip. */
  bars: z.array(TideBar),
  openEpisodes: z.number().int(),
  dataThrough: z.string().nullable(),
  lastUpload: z
    .object({
      id: z.uuid(),
      filename: z.string(),
      status: z.enum(UPLOAD_STATUSES),
      createdAt: z.string(),
      problem: z.string().nullable(),
    })
    .nullable(),
  ground: z.enum(GROUNDS),
  /** The ground in a sentence, in the units asked for. */
  why: z.string(),
  /** From 1, over all of the asker's plants. */
  rank: z.number().int(),
});
export type OverviewPlant = z.infer<typeof OverviewPlant>;
