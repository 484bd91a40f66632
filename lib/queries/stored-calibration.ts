import { z } from 'zod';
import { SENSOR_ROLES, type Calibration } from '../hydronics/calibration-types';

/** A number that is null where it is not known: NaN in the core. */
const figure = z
  .number()
  .nullable()
  .transform((value) => value ?? Number.NaN);

const StoredCalibration: z.ZodType<Calibration> = z.object({
  kernelVersion: z.string(),
  intervals: z.number(),
  values: z.array(figure),
  covariance: z.array(figure),
  sets: z.array(z.number()),
  noise: z.array(figure),
  shareScale: figure,
  header: z.object({ side: z.enum(['primary', 'secondary', 'unknown', 'absent']), primaryProbability: figure }),
  findings: z.array(
    z.object({
      role: z.enum(SENSOR_ROLES),
      kind: z.enum(['offset', 'gain']),
      value: figure,
      lo: figure,
      hi: figure,
      prior: figure,
      told: figure,
      tie: z.enum(['supplies-agree', 'returns-agree', 'energy-balance', 'flow-balance', 'spot-check', 'none']),
      evidenceHours: figure,
      noise: figure,
      increment: figure,
    }),
  ),
  limits: z.array(z.enum(['common-offset', 'common-gain', 'one-way-only', 'no-flow', 'too-short'])),
  chiSquare: z.object({ median: figure, limit: figure, shareWithin: figure }),
});

/** A calibration as JSON text: what is not known becomes null. */
export const calibrationJson = (calibration: Calibration): string => JSON.stringify(calibration);

/**
 * A calibration as it was stored.
 *
 * Throws  ZodError when it is not one: results must not rest on half of it.
 */
export const calibrationOf = (detail: unknown): Calibration => StoredCalibration.parse(detail);

/** The same after its way through the database, so that a result is the same whether its calibration is new or stored. */
export const asStored = (calibration: Calibration): Calibration =>
  calibrationOf(JSON.parse(calibrationJson(calibration)));
