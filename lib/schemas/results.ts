import { z } from 'zod';
import { CAUSES, DIRECTIONS, STATES } from '../hydronics/types';
import { Moment, Paging, Period } from './common';

const Figure = z.number().nullable();

export const IntervalRow = z.object({
  timestamp: z.string(),
  direction: z.enum(DIRECTIONS),
  reverseProbability: Figure,
  bypassFlowGpm: Figure,
  bypassFlowLoGpm: Figure,
  bypassFlowHiGpm: Figure,
  blendedSupplyF: Figure,
  blendedSupplyLoF: Figure,
  blendedSupplyHiF: Figure,
  primaryFlowGpm: Figure,
  secondaryFlowGpm: Figure,
  primarySupplyF: Figure,
  primaryReturnF: Figure,
  secondaryReturnF: Figure,
  loadTons: Figure,
  loadDeltaTF: Figure,
  productionDeltaTF: Figure,
  steady: z.boolean().nullable(),
  quality: Figure,
  state: z.enum(STATES),
  reason: z.string(),
});
export type IntervalRow = z.infer<typeof IntervalRow>;

export const HourRow = z.object({
  hourStart: z.string(),
  low: z.union([z.literal(0), z.literal(1)]),
  loadTons: Figure,
  deltaTF: Figure,
  expectedDeltaTF: Figure,
  productionDeltaTF: Figure,
  reverseMinutes: z.number(),
  reverseFlowGpm: Figure,
  blendedSupplyF: Figure,
  blendedSupplyMaxF: Figure,
  excessFlowGpm: Figure,
  avoidableFlowGpm: Figure,
  cause: z.enum(CAUSES),
  causeConfidence: Figure,
  excessEnergyKwh: Figure,
  excessCost: Figure,
  strandedTons: Figure,
  unknownMinutes: z.number(),
  quality: Figure,
});
export type HourRow = z.infer<typeof HourRow>;

export const RANKS = ['excess', 'cost', 'deltaT', 'reverse'] as const;
export type Rank = (typeof RANKS)[number];

export const IntervalsQuery = Period.extend({
  limit: z.coerce.number().int().min(1).max(10_000).default(1000),
  cursor: z.string().max(400).optional(),
  format: z.enum(['json', 'csv']).default('json'),
  units: z.enum(['ip', 'si']).default('ip'),
});
export const HoursQuery = Period.extend({
  ...Paging.shape,
  rank: z.enum(RANKS).default('excess'),
  cause: z.enum(CAUSES).or(z.literal('')).optional(),
  all: z.stringbool().default(false),
  format: z.enum(['json', 'csv', 'xlsx']).default('json'),
  units: z.enum(['ip', 'si']).default('ip'),
});
export const HourParams = z.object({ plantId: z.uuid(), hourStart: z.iso.datetime({ offset: true }) });
export const SeriesQuery = z.object({
  from: Moment,
  to: Moment,
  points: z.string().min(1),
  width: z.coerce.number().int().min(10).max(8000).default(1200),
  units: z.enum(['ip', 'si']).default('ip'),
});
/** One series a requested point: columns of equal length, missing as null. */
export const Series = z.object({
  from: z.string(),
  to: z.string(),
  stepMinutes: z.number(),
  /** Start of each bar, epoch ms. */
  times: z.array(z.number()),
  series: z.array(
    z.object({
      point: z.string(),
      label: z.string(),
      unit: z.string(),
      lo: z.array(Figure),
      mean: z.array(Figure),
      hi: z.array(Figure),
    }),
  ),
});
export type Series = z.infer<typeof Series>;

/** A bar of the tide strip: one thinned stretch of intervals. */
export const TideBar = z.object({
  /** Start of the bar, epoch ms. */
  t: z.number(),
  /** Minutes of each direction inside the bar. */
  forwardMinutes: z.number(),
  reverseMinutes: z.number(),
  stillMinutes: z.number(),
  unknownMinutes: z.number(),
  /** Mean probability of the direction that held most minutes, 0 to 1. */
  probability: Figure,
  bypassFlowGpm: Figure,
  bypassFlowLoGpm: Figure,
  bypassFlowHiGpm: Figure,
  /** Means over the forward and over the reverse minutes, for a bar that holds both. */
  forwardFlowGpm: Figure,
  reverseFlowGpm: Figure,
  blendedSupplyF: Figure,
  blendedSupplyMaxF: Figure,
  primarySupplyF: Figure,
  primaryReturnF: Figure,
  secondaryReturnF: Figure,
  primaryFlowGpm: Figure,
  secondaryFlowGpm: Figure,
  loadTons: Figure,
});
export type TideBar = z.infer<typeof TideBar>;
export const Tide = z.object({
  from: z.string(),
  to: z.string(),
  barMinutes: z.number(),
  stepMinutes: z.number(),
  bars: z.array(TideBar),
});
export type Tide = z.infer<typeof Tide>;

export const PlantDay = z.object({
  day: z.string(),
  reverseMinutes: z.number(),
  unknownMinutes: z.number(),
  runningMinutes: z.number(),
  largestReverseFlowGpm: Figure,
  warmestSupplyF: Figure,
  lowHours: z.number(),
  excessCost: Figure,
  excessEnergyKwh: Figure,
  loadTonHours: Figure,
  coverage: Figure,
});
export type PlantDay = z.infer<typeof PlantDay>;

export const Episode = z.object({
  id: z.uuid(),
  plantId: z.uuid(),
  cause: z.enum(CAUSES),
  startedAt: z.string(),
  endedAt: z.string(),
  hours: z.number(),
  worstHour: z.string(),
  largestReverseFlowGpm: Figure,
  warmestSupplyF: Figure,
  excessEnergyKwh: Figure,
  excessCost: Figure,
  acknowledgedAt: z.string().nullable(),
  acknowledgedBy: z.string().nullable(),
  note: z.string().nullable(),
});
export type Episode = z.infer<typeof Episode>;

/** One of the five stations of the tee sheet. */
export const Station = z.object({
  station: z.enum([
    'production-supply',
    'supply-to-buildings',
    'return-from-buildings',
    'return-to-production',
    'common-pipe',
  ]),
  measuredTempF: Figure,
  reconciledTempF: Figure,
  tempPlusMinusF: Figure,
  measuredFlowGpm: Figure,
  reconciledFlowGpm: Figure,
  flowLoGpm: Figure,
  flowHiGpm: Figure,
});
export const HourDetail = z.object({
  hour: HourRow,
  direction: z.enum(DIRECTIONS),
  reverseProbability: Figure,
  bypassFlowGpm: Figure,
  bypassFlowLoGpm: Figure,
  bypassFlowHiGpm: Figure,
  steadyIntervals: z.number(),
  intervals: z.number(),
  unitsRunning: Figure,
  stations: z.array(Station),
  /** Degrees of the hour: production = load + blend - dilution. */
  ledger: z.object({ loadF: Figure, blendF: Figure, dilutionF: Figure, productionF: Figure }),
  evidence: z.array(z.object({ claim: z.string(), detail: z.string() })),
  rank: z.number().int().nullable(),
  rankOf: z.number().int(),
  before: z.string().nullable(),
  after: z.string().nullable(),
  settingsRevision: z.number().int(),
  /** Number of the calibration the hour rests on; 0: none. */
  calibrationId: z.number().int(),
  kernelVersion: z.string(),
});
export type HourDetail = z.infer<typeof HourDetail>;
