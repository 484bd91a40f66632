import { z } from 'zod';
import { TimeZone } from './common';

export const ARRANGEMENTS = ['primary-secondary', 'variable-primary', 'building-bridge'] as const;
export const STEP_MINUTES = [1, 2, 3, 5, 6, 10, 12, 15, 20, 30, 60] as const;
const positive = (message: string) => z.number(message).positive(message);

export const Fluid = z
  .object({
    kind: z.enum(['water', 'ethylene-glycol', 'propylene-glycol']),
    massPercent: z.number().min(0).max(60).default(0),
  })
  .refine((fluid) => fluid.kind === 'water' || fluid.massPercent > 0, {
    path: ['massPercent'],
    error: 'Give the mass percent of glycol.',
  });

export const ProductionUnit = z
  .object({
    name: z.string().trim().min(1).max(60),
    tons: positive('Give the unit’s rated tons.'),
    flowGpm: z.number().positive().optional(),
    deltaTF: z.number().positive().max(40).optional(),
    minFlowGpm: z.number().nonnegative().optional(),
    maxFlowGpm: z.number().positive().optional(),
    kwPerTon: z.number().positive().max(5).optional(),
    auxiliaryKw: z.number().nonnegative().optional(),
  })
  .refine((unit) => unit.flowGpm !== undefined || unit.deltaTF !== undefined, {
    path: ['flowGpm'],
    error: 'Give the unit’s design flow or its design delta-T.',
  });

export const DistributionPumps = z.object({
  flowGpm: z.number().positive().optional(),
  headFt: z.number().positive().optional(),
  controlHeadFt: z.number().nonnegative().optional(),
  efficiency: z.number().gt(0).max(1).optional(),
  motorEfficiency: z.number().gt(0).max(1).optional(),
});

export const Design = z.object({
  productionSupplyF: z.number('Give the production supply set-point.').min(20).max(70),
  loadDeltaTF: z.number().positive().max(40).optional(),
  loadTons: z.number().positive().optional(),
  productionUnits: z.array(ProductionUnit).min(1, 'Give at least one production unit.').max(40),
  distributionPumps: DistributionPumps.default({}),
  blendedSupplyF: z.number().min(20).max(80).nullable().default(null),
  pumping: z
    .object({
      connection: z.enum(['dedicated', 'headered']).optional(),
      speed: z.enum(['constant', 'variable']).optional(),
      checkValveInCommonPipe: z.boolean().optional(),
    })
    .default({}),
  criticalLoads: z.array(z.string().trim().min(1).max(120)).max(40).default([]),
  standbyUnits: z.number().int().min(0).max(40).default(0),
});

export const Tariff = z.object({
  currency: z.string().regex(/^[A-Z]{3}$/, 'Give a currency code of three letters, such as USD.'),
  energyPerKwh: z.number().nonnegative().max(1000),
  demandPerKwMonth: z.number().nonnegative().optional(),
});

export const SensorUncertainty = z.object({
  sigmaF: z.number().positive().max(10).optional(),
  sigmaPercent: z.number().positive().max(50).optional(),
});

/** Shares that decide when an hour is low; fractions of design. */
export const LowRule = z.object({
  loadShare: z.number().min(0).max(0.9).default(0.15),
  deltaTShare: z.number().min(0.1).max(1).default(0.8),
});

export const PlantSettings = z.object({
  fluid: Fluid.default({ kind: 'water', massPercent: 0 }),
  design: Design,
  tariff: Tariff.nullable().default(null),
  sensors: z.record(z.string(), SensorUncertainty).default({}),
  low: LowRule.default({ loadShare: 0.15, deltaTShare: 0.8 }),
});
export type PlantSettings = z.infer<typeof PlantSettings>;
export type PlantSettingsInput = z.input<typeof PlantSettings>;

const identity = {
  name: z.string().trim().min(1, 'Give the plant’s name.').max(120),
  timeZone: TimeZone,
  arrangement: z.enum(ARRANGEMENTS),
  stepMinutes: z.union(STEP_MINUTES.map((step) => z.literal(step))).default(5),
};

export const CreatePlant = z
  .object({ organizationId: z.uuid().optional(), ...identity, ...PlantSettings.shape })
  .refine((plant) => plant.arrangement !== 'building-bridge' || plant.design.blendedSupplyF !== null, {
    path: ['design', 'blendedSupplyF'],
    error: 'A building bridge needs the supply temperature it is meant to blend to.',
  });
export type CreatePlant = z.infer<typeof CreatePlant>;

export const UpdatePlant = z.object({ ...identity, ...PlantSettings.shape }).partial();
export type UpdatePlant = z.infer<typeof UpdatePlant>;

export const Plant = z.object({
  id: z.uuid(),
  organizationId: z.uuid(),
  organizationName: z.string(),
  ...identity,
  settingsRevision: z.number().int(),
  ...PlantSettings.shape,
  /** Dotted paths of the design numbers that nobody has given: the product's own defaults. */
  assumed: z.array(z.string()),
  dataFrom: z.string().nullable(),
  dataThrough: z.string().nullable(),
  createdAt: z.string(),
});
export type Plant = z.infer<typeof Plant>;
