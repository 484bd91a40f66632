import { z } from 'zod';
import { UnitSystem } from './common';

export const UpdateMe = z.object({ unitSystem: UnitSystem.optional() });
