import { describe, expect, test } from 'vitest';
import { deltaTFromTonsF, flowFromTonsGpm } from '@/lib/hydronics/design-flow';
import { tonsFromFlow } from '@/lib/hydronics/fluids';
import { plantModelFromSettings } from '@/lib/hydronics/plant-model';
import { PlantSettings } from '@/lib/schemas/plant';
import { TWO_UNITS, WATER } from './support/plants';

const least = PlantSettings.parse({
  design: { productionSupplyF: 44, productionUnits: [{ name: 'CH-1', tons: 450, deltaTF: 12 }] },
});

describe('plantModelFromSettings', () => {
  test('fills every design number that nobody gave and lists its path', () => {
    const { model, assumed } = plantModelFromSettings(least, 'primary-secondary');
    expect([...assumed].sort()).toEqual(
      [
        'design.productionUnits.0.minFlowGpm',
        'design.productionUnits.0.maxFlowGpm',
        'design.productionUnits.0.kwPerTon',
        'design.productionUnits.0.auxiliaryKw',
        'design.loadDeltaTF',
        'design.loadTons',
        'design.distributionPumps.headFt',
        'design.distributionPumps.controlHeadFt',
        'design.distributionPumps.efficiency',
        'design.distributionPumps.motorEfficiency',
        'design.distributionPumps.flowGpm',
        'design.pumping.speed',
        'sensors.primarySupplyTemp.sigmaF',
        'sensors.primaryReturnTemp.sigmaF',
        'sensors.secondarySupplyTemp.sigmaF',
        'sensors.secondaryReturnTemp.sigmaF',
        'sensors.bypassTemp.sigmaF',
        'sensors.primaryFlow.sigmaPercent',
        'sensors.secondaryFlow.sigmaPercent',
        'sensors.bypassFlow.sigmaPercent',
        'sensors.ratedFlow.sigmaPercent',
      ].sort(),
    );
    const [unit] = model.units;
    // 450 tons at 12 F is 900 gpm by the rule of 500, 897 by real water.
    expect(unit?.flowGpm).toBeCloseTo(896.9, 0);
    expect(unit?.minFlowGpm).toBeCloseTo((unit?.flowGpm ?? 0) / 2, 9);
    expect(unit?.maxFlowGpm).toBeCloseTo((unit?.flowGpm ?? 0) * 1.2, 9);
    expect(model).toMatchObject({ loadTons: 450, primarySpeed: 'constant', energyPerKwh: null, blendedSupplyF: null });
    expect(model.loadDeltaTF).toBeCloseTo(12, 2);
    expect(model.distributionPumps.flowGpm).toBeCloseTo(unit?.flowGpm ?? 0, 0);
    expect(model.sensors.temperatureSigmaF.secondarySupplyTemp).toBe(0.35);
  });

  test('lists nothing that was given', () => {
    const given = PlantSettings.parse({
      design: {
        productionSupplyF: 44,
        loadDeltaTF: 12,
        loadTons: 900,
        productionUnits: [
          { name: 'CH-1', tons: 450, flowGpm: 900, minFlowGpm: 450, maxFlowGpm: 1080, kwPerTon: 0.58, auxiliaryKw: 42 },
        ],
        distributionPumps: { flowGpm: 1800, headFt: 85, controlHeadFt: 25, efficiency: 0.76, motorEfficiency: 0.93 },
        pumping: { speed: 'variable' },
      },
      sensors: { secondarySupplyTemp: { sigmaF: 0.3 }, primaryFlow: { sigmaPercent: 2 } },
      tariff: { currency: 'USD', energyPerKwh: 0.14 },
    });
    const { model, assumed } = plantModelFromSettings(given, 'primary-secondary');
    expect(assumed.filter((path) => path.startsWith('design'))).toEqual([]);
    expect(assumed).not.toContain('sensors.secondarySupplyTemp.sigmaF');
    expect(assumed).not.toContain('sensors.primaryFlow.sigmaPercent');
    expect(model.units[0]).toEqual({
      tons: 450,
      flowGpm: 900,
      minFlowGpm: 450,
      maxFlowGpm: 1080,
      kwPerTon: 0.58,
      auxiliaryKw: 42,
    });
    expect(model.distributionPumps.controlHeadFt).toBe(25);
    expect(model.sensors.temperatureSigmaF.secondarySupplyTemp).toBe(0.3);
    expect(model.energyPerKwh).toBe(0.14);
  });

  test('takes the pumps of a variable-primary plant to be variable, and a blend only for a building bridge', () => {
    expect(plantModelFromSettings(least, 'variable-primary').model.primarySpeed).toBe('variable');
    const blending = PlantSettings.parse({ ...TWO_UNITS, design: { ...TWO_UNITS.design, blendedSupplyF: 48 } });
    expect(plantModelFromSettings(blending, 'building-bridge').model.blendedSupplyF).toBe(48);
    expect(plantModelFromSettings(blending, 'primary-secondary').model.blendedSupplyF).toBeNull();
  });

  test('leaves standby units, listed last, out of the design load', () => {
    const standby = PlantSettings.parse({
      ...TWO_UNITS,
      design: { ...TWO_UNITS.design, loadTons: undefined, standbyUnits: 1 },
    });
    expect(plantModelFromSettings(standby, 'primary-secondary').model.loadTons).toBe(450);
  });

  test('keeps the control head under a low design head', () => {
    const low = PlantSettings.parse({
      ...TWO_UNITS,
      design: { ...TWO_UNITS.design, distributionPumps: { headFt: 15 } },
    });
    expect(plantModelFromSettings(low, 'primary-secondary').model.distributionPumps.controlHeadFt).toBe(15);
  });

  test('refuses a unit with neither flow nor delta-T', () => {
    const bare = { ...least, design: { ...least.design, productionUnits: [{ name: 'CH-1', tons: 450 }] } };
    expect(() => plantModelFromSettings(bare, 'primary-secondary')).toThrow(/unit 1/);
  });
});

describe('design flow', () => {
  test('carries its tons at its delta-T, and turns back', () => {
    const flowGpm = flowFromTonsGpm(450, 12, 44, WATER);
    // The trade factor at the mean temperature stands for the enthalpy rise to 1e-4.
    expect(Math.abs(tonsFromFlow(flowGpm, 44, 56, WATER, 50) / 450 - 1)).toBeLessThan(1e-4);
    expect(deltaTFromTonsF(450, flowGpm, 44, WATER)).toBeCloseTo(12, 4);
  });
});
