import { z } from 'zod';
import { SENSOR_ROLES, type Calibration } from '../hydronics/calibration-types';

/** A number, or null where it is not known: NaN in the core. */
const Stored = z.number().nullable();

/** What every stored calibration has, whichever kernel made it; what else it has goes through as it is. */
const StoredCalibration = z.looseObject({
  kernelVersion: z.string(),
  values: z.array(Stored),
  covariance: z.array(Stored),
  header: z.object({ side: z.enum(['primary', 'secondary', 'unknown', 'absent']), primaryProbability: Stored }),
  findings: z.array(z.looseObject({ role: z.enum(SENSOR_ROLES), kind: z.enum(['offset', 'gain']), value: Stored })),
  limits: z.array(z.string()),
  chiSquare: z.object({ median: Stored, limit: Stored, shareWithin: Stored }),
});

/** A calibration as JSON text: what is not known becomes null. */
export const calibrationJson = (calibration: Calibration): string => JSON.stringify(calibration);

/** Null back to NaN, all through: a calibration holds numbers and words, and no other emptiness. */
function withNaN(value: unknown): unknown {
  if (value === null) return Number.NaN;
  if (Array.isArray(value)) return value.map(withNaN);
  if (typeof value !== 'object') return value;
  return Object.fromEntries(Object.entries(value).map(([name, inner]: [string, unknown]) => [name, withNaN(inner)]));
}

/**
 * A calibration as it was stored, with every field that its kernel gave it.
 *
 * Throws  ZodError when it is not one: results must not rest on half of it.
 */
export function calibrationOf(detail: unknown): Calibration {
  StoredCalibration.parse(detail);
  return withNaN(detail) as Calibration;
}

/** The same after its way through the database, so that a result is the same whether its calibration is new or stored. */
export const asStored = (calibration: Calibration): Calibration =>
  calibrationOf(JSON.parse(calibrationJson(calibration)));
