import { deltaTFromTonsF, flowFromTonsGpm } from './design-flow';
import { specificHeatBtuPerLbF } from './fluids';
import { pumpRiseF } from './pumps';
import type { Arrangement, DistributionPumpsModel, Fluid, PlantModel, SensorModel, UnitModel } from './types';

/** The parts of a plant's settings that the kernel reads; what nobody has given is absent. */
export interface PlantSettingsLike {
  fluid: Fluid;
  design: {
    productionSupplyF: number;
    loadDeltaTF?: number | undefined;
    loadTons?: number | undefined;
    productionUnits: readonly {
      tons: number;
      flowGpm?: number | undefined;
      deltaTF?: number | undefined;
      minFlowGpm?: number | undefined;
      maxFlowGpm?: number | undefined;
      kwPerTon?: number | undefined;
      auxiliaryKw?: number | undefined;
    }[];
    distributionPumps: { [Key in keyof DistributionPumpsModel]?: DistributionPumpsModel[Key] | undefined };
    blendedSupplyF: number | null;
    pumping: { speed?: 'constant' | 'variable' | undefined };
    standbyUnits: number;
  };
  tariff: { energyPerKwh: number } | null;
  /** By point role. */
  sensors: Readonly<Record<string, { sigmaF?: number | undefined; sigmaPercent?: number | undefined }>>;
  low: { loadShare: number; deltaTShare: number };
}

/** Design numbers that stand in for what nobody has given. Each is listed in `assumed` when it is used. */
const DEFAULTS = {
  /** Least and most evaporator flow as share of design (common practice; the maker's own data govern). */
  minFlowShare: 0.5,
  maxFlowShare: 1.2,
  /** Water-cooled unit, full load (common practice; typical site figures are 0.35 to 0.9). */
  kwPerTon: 0.6,
  /** Primary pump, condenser pump and tower fan of a unit, kW a rated ton (common practice, no source). */
  auxiliaryKwPerTon: 0.1,
  /** Distribution pumps (common practice, no source). */
  headFt: 80,
  controlHeadFt: 20,
  pumpEfficiency: 0.78,
  /** Premium motors of 50 to 500 hp: 0.93 to 0.96. */
  motorEfficiency: 0.93,
  /** A sensor of which nothing is known: resistance thermometer of class B at 45 F, k = 1 (IEC 60751, from memory). */
  temperatureSigmaF: 0.35,
  /** Common pipes have strap-on sensors more often than wells: 0.5 to 1 F (common practice, no source). */
  bypassTemperatureSigmaF: 0.5,
  /** Insertion meter as installed: 3 to 5 % (common practice, no source). */
  flowSigmaPercent: 3,
  /** Flow inferred from a running pump: 10 to 20 % (common practice, no source). */
  ratedFlowSigmaPercent: 10,
} as const;

/** Notes the path of every number that is taken from the defaults. */
type Assume = <Value>(given: Value | null | undefined, path: string, fallback: Value) => Value;

function unitModels(settings: PlantSettingsLike, fluid: Fluid, assume: Assume): UnitModel[] {
  const { productionUnits, productionSupplyF } = settings.design;
  return productionUnits.map((unit, index) => {
    const path = `design.productionUnits.${index}`;
    const flowGpm = unit.flowGpm ?? flowFromTonsGpm(unit.tons, unit.deltaTF ?? Number.NaN, productionSupplyF, fluid);
    return {
      tons: unit.tons,
      flowGpm,
      minFlowGpm: assume(unit.minFlowGpm, `${path}.minFlowGpm`, DEFAULTS.minFlowShare * flowGpm),
      maxFlowGpm: assume(unit.maxFlowGpm, `${path}.maxFlowGpm`, DEFAULTS.maxFlowShare * flowGpm),
      kwPerTon: assume(unit.kwPerTon, `${path}.kwPerTon`, DEFAULTS.kwPerTon),
      auxiliaryKw: assume(unit.auxiliaryKw, `${path}.auxiliaryKw`, DEFAULTS.auxiliaryKwPerTon * unit.tons),
    };
  });
}

function pumpsModel(settings: PlantSettingsLike, designFlowGpm: number, assume: Assume): DistributionPumpsModel {
  const pumps = settings.design.distributionPumps;
  const path = 'design.distributionPumps';
  const headFt = assume(pumps.headFt, `${path}.headFt`, DEFAULTS.headFt);
  return {
    flowGpm: assume(pumps.flowGpm, `${path}.flowGpm`, designFlowGpm),
    headFt,
    controlHeadFt: Math.min(headFt, assume(pumps.controlHeadFt, `${path}.controlHeadFt`, DEFAULTS.controlHeadFt)),
    efficiency: assume(pumps.efficiency, `${path}.efficiency`, DEFAULTS.pumpEfficiency),
    motorEfficiency: assume(pumps.motorEfficiency, `${path}.motorEfficiency`, DEFAULTS.motorEfficiency),
  };
}

function sensorModel(settings: PlantSettingsLike, assume: Assume): SensorModel {
  const sigmaF = (role: string, fallback: number = DEFAULTS.temperatureSigmaF) =>
    assume(settings.sensors[role]?.sigmaF, `sensors.${role}.sigmaF`, fallback);
  const sigmaPercent = (role: string, fallback: number = DEFAULTS.flowSigmaPercent) =>
    assume(settings.sensors[role]?.sigmaPercent, `sensors.${role}.sigmaPercent`, fallback);
  return {
    temperatureSigmaF: {
      primarySupplyTemp: sigmaF('primarySupplyTemp'),
      primaryReturnTemp: sigmaF('primaryReturnTemp'),
      secondarySupplyTemp: sigmaF('secondarySupplyTemp'),
      secondaryReturnTemp: sigmaF('secondaryReturnTemp'),
      bypassTemp: sigmaF('bypassTemp', DEFAULTS.bypassTemperatureSigmaF),
    },
    flowSigmaPercent: {
      primaryFlow: sigmaPercent('primaryFlow'),
      secondaryFlow: sigmaPercent('secondaryFlow'),
      bypassFlow: sigmaPercent('bypassFlow'),
      ratedFlow: sigmaPercent('ratedFlow', DEFAULTS.ratedFlowSigmaPercent),
    },
  };
}

/** Tons the plant was designed to deliver: its units without the standby ones, which are listed last. */
function dutyTons(settings: PlantSettingsLike): number {
  const { productionUnits, standbyUnits } = settings.design;
  const duty = productionUnits.slice(0, Math.max(1, productionUnits.length - standbyUnits));
  return duty.reduce((total, unit) => total + unit.tons, 0);
}

/**
 * The kernel's plant from the plant's settings, with a default for every design number that nobody has given.
 * A unit's flow follows from its tons and delta-T when only these are given; that is derived, not assumed.
 *
 * Units   as named. `assumed` holds dotted paths into the settings, e.g. `design.productionUnits.0.minFlowGpm`.
 * Throws  RangeError when a unit has neither flow nor delta-T, or a glycol's mass percent is outside 0 to 60.
 * Source  defaults: see DEFAULTS.
 */
export function plantModelFromSettings(
  settings: PlantSettingsLike,
  arrangement: Arrangement,
): { model: PlantModel; assumed: string[] } {
  const assumed: string[] = [];
  const assume: Assume = (given, path, fallback) => {
    if (given !== undefined && given !== null) return given;
    assumed.push(path);
    return fallback;
  };
  const { design } = settings;
  const fluid: Fluid = { kind: settings.fluid.kind, massPercent: settings.fluid.massPercent };
  design.productionUnits.forEach((unit, index) => {
    if (unit.flowGpm === undefined && unit.deltaTF === undefined) {
      throw new RangeError(`plantModelFromSettings: unit ${index + 1} has neither design flow nor design delta-T`);
    }
  });
  const units = unitModels(settings, fluid, assume);
  const unitTons = units.reduce((total, unit) => total + unit.tons, 0);
  const unitFlowGpm = units.reduce((total, unit) => total + unit.flowGpm, 0);
  const unitDeltaTF = deltaTFromTonsF(unitTons, unitFlowGpm, design.productionSupplyF, fluid);
  const loadDeltaTF = assume(design.loadDeltaTF, 'design.loadDeltaTF', unitDeltaTF);
  const loadTons = assume(design.loadTons, 'design.loadTons', dutyTons(settings));
  const loadFlowGpm = flowFromTonsGpm(loadTons, loadDeltaTF, design.productionSupplyF, fluid);
  // Pump heat is physics, not a sensor's offset, but only a head that someone gave is known.
  const { headFt } = design.distributionPumps;
  const pumps = pumpsModel(settings, loadFlowGpm, assume);
  const riseF =
    headFt === undefined
      ? undefined
      : pumpRiseF(headFt, pumps.efficiency, specificHeatBtuPerLbF(design.productionSupplyF, fluid));
  const model: PlantModel = {
    arrangement,
    fluid,
    productionSupplyF: design.productionSupplyF,
    loadDeltaTF,
    loadTons,
    units,
    distributionPumps: pumps,
    ...(riseF === undefined ? {} : { distributionRiseF: riseF }),
    primarySpeed: assume(
      design.pumping.speed,
      'design.pumping.speed',
      arrangement === 'variable-primary' ? 'variable' : 'constant',
    ),
    blendedSupplyF: arrangement === 'building-bridge' ? design.blendedSupplyF : null,
    sensors: sensorModel(settings, assume),
    lowLoadShare: settings.low.loadShare,
    lowDeltaTShare: settings.low.deltaTShare,
    energyPerKwh: settings.tariff?.energyPerKwh ?? null,
  };
  return { model, assumed };
}
