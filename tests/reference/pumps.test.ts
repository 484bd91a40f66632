// Pump power on a system curve with control head; values and their source in fixtures/reference/pumps.json.
import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/pumps.json';
import {
  distributionPumpPowerKw,
  excessPumpPowerKw,
  pumpPowerKw,
  pumpRiseF,
  systemHeadFt,
} from '@/lib/hydronics/pumps';

const pumps = (
  flowGpm: number,
  headFt: number,
  controlHeadFt: number,
  efficiency: number,
  motorEfficiency: number,
) => ({
  flowGpm,
  headFt,
  controlHeadFt,
  efficiency,
  motorEfficiency,
});

describe('pump power', () => {
  test('of 1000 gpm at 80 ft is 20.8744 kW', () => {
    const { flowGpm, headFt, efficiency, motorEfficiency, driveEfficiency, powerKw } = table.single;
    expect(pumpPowerKw(flowGpm, headFt, efficiency, motorEfficiency, driveEfficiency)).toBeCloseTo(powerKw, 4);
  });

  test.each(table.curve.points)('at $flowGpm gpm with $controlHeadFt ft of control head is $powerKw kW', (row) => {
    const { designFlowGpm, designHeadFt, efficiency, motorEfficiency, driveEfficiency } = table.curve;
    const model = pumps(designFlowGpm, designHeadFt, row.controlHeadFt, efficiency, motorEfficiency);
    expect(systemHeadFt(row.flowGpm, model)).toBeCloseTo(row.headFt, 4);
    expect(distributionPumpPowerKw(row.flowGpm, model, driveEfficiency)).toBeCloseTo(row.powerKw, 4);
  });

  test('of 1200 gpm where 1000 were needed is 9.1883 kW too much', () => {
    const { designFlowGpm, designHeadFt, controlHeadFt, efficiency, motorEfficiency, points, excessKw } = table.excess;
    const model = pumps(designFlowGpm, designHeadFt, controlHeadFt, efficiency, motorEfficiency);
    for (const point of points) {
      expect(systemHeadFt(point.flowGpm, model)).toBeCloseTo(point.headFt, 4);
      expect(distributionPumpPowerKw(point.flowGpm, model)).toBeCloseTo(point.powerKw, 4);
    }
    expect(excessPumpPowerKw(excessKw.flowGpm, excessKw.neededGpm, model)).toBeCloseTo(excessKw.powerKw, 4);
    expect(excessPumpPowerKw(1000, 1200, model)).toBe(0);
  });
});

describe('heat of a pump in the water', () => {
  // First law: what the pump loses stays in the water. 80 ft at 78 % in water of 1.0032 Btu/lb F, computed by hand:
  // (1 / 0.78 - 1) * 80 / (778.17 * 1.0032) = 0.0289 F. A pump without losses warms nothing at its own place.
  test('is 0.029 F for 80 ft at 78 %, and none at 100 %', () => {
    expect(pumpRiseF(80, 0.78, 1.0032)).toBeCloseTo(0.0289, 4);
    expect(pumpRiseF(80, 1, 1.0032)).toBe(0);
    expect(() => pumpRiseF(80, 0, 1)).toThrow(RangeError);
  });
});
