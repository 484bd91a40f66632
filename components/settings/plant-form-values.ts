import { z } from 'zod';
import { TimeZone } from '@/lib/schemas/common';
import { ARRANGEMENTS, STEP_MINUTES, type Plant } from '@/lib/schemas/plant';

/** A number typed into a field: empty is "not given", which the product fills with a marked assumption. */
const optionalNumber = z
  .string()
  .trim()
  .refine((text) => text === '' || Number.isFinite(Number(text)), 'Give a number, or leave it empty.')
  .transform((text) => (text === '' ? undefined : Number(text)));
const requiredNumber = (message: string) =>
  z
    .string()
    .trim()
    .refine((text) => text !== '' && Number(text) > 0, message)
    .transform(Number);

const UnitRow = z
  .object({
    name: z.string().trim().min(1, 'Give the unit a name.'),
    tons: requiredNumber('Give its rated tons.'),
    flowGpm: optionalNumber,
    deltaTF: optionalNumber,
    minFlowGpm: optionalNumber,
    maxFlowGpm: optionalNumber,
    kwPerTon: optionalNumber,
    auxiliaryKw: optionalNumber,
  })
  .refine((unit) => unit.flowGpm !== undefined || unit.deltaTF !== undefined, {
    path: ['flowGpm'],
    error: 'Give its design flow or its delta-T.',
  });

/** The plant form's fields as typed; `plantBody` makes the API's body of what comes out. */
export const PlantForm = z
  .object({
    organizationId: z.string(),
    name: z.string().trim().min(1, 'Give the plant’s name.').max(120),
    timeZone: TimeZone,
    arrangement: z.enum(ARRANGEMENTS),
    stepMinutes: z.string(),
    productionSupplyF: requiredNumber('Give the production supply set-point.'),
    blendedSupplyF: optionalNumber,
    loadDeltaTF: optionalNumber,
    loadTons: optionalNumber,
    units: z.array(UnitRow).min(1, 'Give at least one unit.'),
    pumpFlowGpm: optionalNumber,
    pumpHeadFt: optionalNumber,
    currency: z
      .string()
      .trim()
      .regex(/^([A-Za-z]{3})?$/, 'Three letters, such as USD.'),
    energyPerKwh: optionalNumber,
  })
  .refine((plant) => plant.arrangement !== 'building-bridge' || plant.blendedSupplyF !== undefined, {
    path: ['blendedSupplyF'],
    error: 'A building bridge needs the supply temperature it is meant to blend to.',
  });
export type PlantFormInput = z.input<typeof PlantForm>;
export type PlantFormOutput = z.output<typeof PlantForm>;

export const STEP_OPTIONS = STEP_MINUTES.map((step) => ({ value: String(step), label: `${step} min` }));
export const EMPTY_UNIT = {
  name: '',
  tons: '',
  flowGpm: '',
  deltaTF: '',
  minFlowGpm: '',
  maxFlowGpm: '',
  kwPerTon: '',
  auxiliaryKw: '',
};

export function emptyForm(organizationId: string, timeZone: string): PlantFormInput {
  return {
    organizationId,
    name: '',
    timeZone,
    arrangement: 'primary-secondary',
    stepMinutes: '5',
    productionSupplyF: '44',
    blendedSupplyF: '',
    loadDeltaTF: '',
    loadTons: '',
    units: [{ ...EMPTY_UNIT, name: 'CH-1' }],
    pumpFlowGpm: '',
    pumpHeadFt: '',
    currency: '',
    energyPerKwh: '',
  };
}

/** The form of a plant that exists; what is assumed shows empty, so that saving does not confirm it by accident. */
export function formOf(plant: Plant): PlantFormInput {
  const assumed = new Set(plant.assumed);
  const given = (value: number | null | undefined, path: string) =>
    value === null || value === undefined || assumed.has(path) ? '' : String(value);
  const { design } = plant;
  return {
    organizationId: plant.organizationId,
    name: plant.name,
    timeZone: plant.timeZone,
    arrangement: plant.arrangement,
    stepMinutes: String(plant.stepMinutes),
    productionSupplyF: String(design.productionSupplyF),
    blendedSupplyF: given(design.blendedSupplyF, 'design.blendedSupplyF'),
    loadDeltaTF: given(design.loadDeltaTF, 'design.loadDeltaTF'),
    loadTons: given(design.loadTons, 'design.loadTons'),
    units: design.productionUnits.map((unit, index) => {
      const part = (key: 'flowGpm' | 'deltaTF' | 'minFlowGpm' | 'maxFlowGpm' | 'kwPerTon' | 'auxiliaryKw') =>
        given(unit[key], `design.productionUnits.${index}.${key}`);
      return {
        name: unit.name,
        tons: String(unit.tons),
        flowGpm: part('flowGpm'),
        deltaTF: part('deltaTF'),
        minFlowGpm: part('minFlowGpm'),
        maxFlowGpm: part('maxFlowGpm'),
        kwPerTon: part('kwPerTon'),
        auxiliaryKw: part('auxiliaryKw'),
      };
    }),
    pumpFlowGpm: given(design.distributionPumps.flowGpm, 'design.distributionPumps.flowGpm'),
    pumpHeadFt: given(design.distributionPumps.headFt, 'design.distributionPumps.headFt'),
    currency: plant.tariff?.currency ?? '',
    energyPerKwh: plant.tariff ? String(plant.tariff.energyPerKwh) : '',
  };
}

/** The body of POST /plants, and the part of PATCH /plants/{id} that this form speaks of. null takes a number away. */
export function plantBody(form: PlantFormOutput, how: 'create' | 'patch') {
  const optional = <Value>(value: Value | undefined) =>
    value === undefined ? (how === 'patch' ? null : undefined) : value;
  return {
    name: form.name,
    timeZone: form.timeZone,
    arrangement: form.arrangement,
    stepMinutes: Number(form.stepMinutes),
    design: {
      productionSupplyF: form.productionSupplyF,
      blendedSupplyF: form.blendedSupplyF ?? null,
      loadDeltaTF: optional(form.loadDeltaTF),
      loadTons: optional(form.loadTons),
      productionUnits: form.units,
      distributionPumps: { flowGpm: optional(form.pumpFlowGpm), headFt: optional(form.pumpHeadFt) },
    },
    tariff:
      form.energyPerKwh === undefined
        ? null
        : { currency: (form.currency || 'USD').toUpperCase(), energyPerKwh: form.energyPerKwh },
  };
}
