import { describe, expect, it } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import { plantModelFromSettings } from '@/lib/hydronics/plant-model';
import type { Measurements } from '@/lib/hydronics/types';
import { asStored, calibrationJson, calibrationOf } from '@/lib/queries/stored-calibration';
import { PlantSettings } from '@/lib/schemas/plant';

const { model } = plantModelFromSettings(
  PlantSettings.parse({
    design: {
      productionSupplyF: 44,
      loadDeltaTF: 12,
      productionUnits: [{ name: 'CH-1', tons: 450, flowGpm: 900 }],
    },
  }),
  'primary-secondary',
);
const none = [undefined];
const nothing: Measurements = {
  n: 96,
  stepMinutes: 15,
  unitStatus: none,
  unitFlowGpm: none,
  unitLeavingF: none,
  unitEnteringF: none,
  unitPowerKw: none,
  primaryPumpStatus: none,
};
const fitted = calibrateRecord(
  { ...nothing, primarySupplyF: new Float64Array(96).fill(44), secondarySupplyF: new Float64Array(96).fill(44.4) },
  model,
);

describe('a calibration in the database', () => {
  it('comes back as it was made, to the last bit, with NaN where it was', () => {
    expect(asStored(fitted)).toEqual(fitted);
    const unknown = { ...fitted, header: { side: 'unknown' as const, primaryProbability: Number.NaN } };
    expect(JSON.parse(calibrationJson(unknown))).toMatchObject({ header: { primaryProbability: null } });
    expect(asStored(unknown)).toEqual(unknown);
  });
  it('that is half of one is refused', () => {
    const { findings: _findings, ...half } = fitted;
    expect(() => calibrationOf(JSON.parse(JSON.stringify(half)))).toThrow();
    expect(() => calibrationOf(null)).toThrow();
  });
});
