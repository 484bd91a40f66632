import { z } from 'zod';
import { Paging, UnitSystem } from './common';

export const UnitsQuery = z.object({ units: UnitSystem.default('ip') });
export const PlantsQuery = Paging.extend(UnitsQuery.shape);

/** A JSON merge patch of a plant: what it makes of the plant is validated as a whole by CreatePlant. */
export const PatchPlant = z.record(z.string(), z.unknown());
