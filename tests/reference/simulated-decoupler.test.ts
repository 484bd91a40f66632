// Simulated hydronic loops with a decoupler: reference trajectories of the Modelica Buildings library (lbl-srg/modelica-buildings,
// commit c4117cce), read from the open data beside the project. Flows kg/s or m3/s, temperatures K, 864 s apart. Counts and
// fractions: computed with numpy on the files as they are (README of the data).
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { forwardFraction, reverseFraction } from '@/lib/hydronics/tees';
import { DIRECTIONS } from '@/lib/hydronics/types';
import { fahrenheitFromCelsius, gpmFromLitresPerSecond, tonsFromKilowatts } from '@/lib/units';
import { plantOf, recordOf } from '../hydronics/support/plants';

const FOLDER = path.resolve(import.meta.dirname, '../../../shared/data/modelica_decoupling');
const STEP_MINUTES = 14.4;

/** Columns of a trajectory by name. */
function trajectory(file: string): (name: string) => number[] {
  const [header = '', ...lines] = readFileSync(path.join(FOLDER, file), 'utf8').trim().split(/\r?\n/);
  const names = header.split(',');
  const rows = lines.map((line) => line.split(',').map(Number));
  return (name) => {
    const column = names.indexOf(name);
    if (column < 0) throw new Error(`${file} has no column ${name}`);
    return rows.map((row) => row[column] ?? Number.NaN);
  };
}

/** Points whose neighbours are nearly the same: start-up and change-over hold transients that no steady balance describes. */
function steadyPoints(channels: readonly number[][], limits: readonly number[]): number[] {
  const n = channels[0]?.length ?? 0;
  return Array.from({ length: n }, (_, at) => at).filter(
    (at) =>
      at > 0 &&
      at < n - 1 &&
      channels.every((values, i) => {
        const here = values[at] ?? Number.NaN;
        return [at - 1, at + 1].every((near) => Math.abs((values[near] ?? Number.NaN) - here) <= (limits[i] ?? 0));
      }),
  );
}

describe('simulated loops with a decoupler', () => {
  if (!existsSync(FOLDER)) {
    test('are not beside the project (shared/data/modelica_decoupling): nothing was compared', () => {
      expect(existsSync(FOLDER)).toBe(false);
    });
    return;
  }

  describe.each([
    'Buildings_Fluid_HydronicConfigurations_ActiveNetworks_Examples_Decoupling.csv',
    'Buildings_Fluid_HydronicConfigurations_ActiveNetworks_Examples_DecouplingTemperature.csv',
  ])('%s', (file) => {
    const column = trajectory(file);
    const [secondary, bypass] = [column('con.pum.m_flow'), column('con.res3.m_flow')];
    const [supply, back, mixed] = [column('T1Sup.T'), column('con.T2Ret.T'), column('T1ConRet.T')];
    const flowing = steadyPoints([secondary, bypass, supply, back, mixed], [0.05, 0.05, 0.01, 0.6, 0.6]).filter(
      (at) => (secondary[at] ?? 0) > 0.1 && Math.abs((back[at] ?? 0) - (supply[at] ?? 0)) > 2,
    );

    test('shows the true bypass flow in its temperatures: the return tee balances at steady points within half a percent', () => {
      expect(flowing.length).toBeGreaterThan(30);
      for (const at of flowing) {
        const [b = 0, s = 0] = [bypass[at], secondary[at]];
        const alpha = forwardFraction(supply[at] ?? 0, back[at] ?? 0, mixed[at] ?? 0);
        expect(Math.abs(alpha - b / (b + s))).toBeLessThan(5e-3);
      }
    });

    test('has a secondary supply that is the primary one but for the heat of the pump between them, under 0.15 K', () => {
      const secondarySupply = column('con.T2Sup.T');
      for (const at of flowing) {
        const rise = (secondarySupply[at] ?? Number.NaN) - (supply[at] ?? Number.NaN);
        expect(rise).toBeGreaterThan(0.02);
        expect(rise).toBeLessThan(0.15);
      }
    });
  });

  describe('Buildings_Templates_Plants_HeatPumps_Validation_AirToWater.csv, chilled-water side', () => {
    const column = trajectory('Buildings_Templates_Plants_HeatPumps_Validation_AirToWater.csv');
    const litres = (name: string) => column(`pla.bus.VChiWat${name}_flow`).map((cubicMetres) => cubicMetres * 1000);
    const temperature = (name: string) => column(`pla.bus.TChiWat${name}`);
    const [primary, secondary] = [litres('Pri'), litres('Sec')];
    const [ps, ss] = [temperature('PriSup'), temperature('SecSup')];
    const [pr, sr] = [temperature('PriRet'), temperature('SecRet')];
    const value = (values: readonly number[], at: number) => values[at] ?? Number.NaN;
    const pumped = (least: number) =>
      primary.map((_, at) => at).filter((at) => value(primary, at) > least && value(secondary, at) > least);
    const byFlow = (at: number) => {
      const gap = value(primary, at) - value(secondary, at);
      return gap > 1 ? 'surplus' : gap < -1 ? 'deficit' : 'neutral';
    };
    const on = pumped(1);
    const deficits = on.filter((at) => byFlow(at) === 'deficit');

    test('has 44 points in surplus, 8 in deficit and 1 in balance, by a litre a second', () => {
      const count = (direction: string) => on.filter((at) => byFlow(at) === direction).length;
      expect([on.length, count('surplus'), count('deficit'), count('neutral')]).toEqual([53, 44, 8, 1]);
    });

    test('has a mean share of returned water in deficit of 0.188 by temperatures and 0.184 by flows', () => {
      const mean = (share: (at: number) => number) =>
        deficits.reduce((sum, at) => sum + share(at), 0) / deficits.length;
      expect(mean((at) => reverseFraction(value(ps, at), value(sr, at), value(ss, at)))).toBeCloseTo(0.188, 3);
      expect(mean((at) => 1 - value(primary, at) / value(secondary, at))).toBeCloseTo(0.184, 3);
    });

    test('is told by temperatures alone on 44 of 48 points above 5 L/s, all deficits among them', () => {
      // A tenth of a kelvin at the supply tee says deficit, else one at the return tee surplus, else balance.
      const byTemperature = (at: number) => {
        if (value(ss, at) - value(ps, at) > 0.1) return 'deficit';
        return value(sr, at) - value(pr, at) > 0.1 ? 'surplus' : 'neutral';
      };
      const compared = pumped(5);
      expect(compared).toHaveLength(48);
      expect(compared.filter((at) => byTemperature(at) === byFlow(at))).toHaveLength(44);
      expect(deficits.every((at) => byTemperature(at) === 'deficit')).toBe(true);
    });

    test('is estimated from four temperatures and two meters without a direction turned round', () => {
      const toF = (kelvins: number[]) => kelvins.map((kelvin) => fahrenheitFromCelsius(kelvin - 273.15));
      const record = recordOf(primary.length, STEP_MINUTES, {
        primarySupplyF: toF(ps),
        primaryReturnF: toF(pr),
        secondarySupplyF: toF(ss),
        secondaryReturnF: toF(sr),
        primaryFlowGpm: primary.map(gpmFromLitresPerSecond),
        secondaryFlowGpm: secondary.map(gpmFromLitresPerSecond),
      });
      // Three units of 500 kW and a third of 72 L/s each, supply 7 C.
      const unit = { tons: tonsFromKilowatts(500), flowGpm: gpmFromLitresPerSecond(24) };
      const plant = plantOf({
        design: {
          productionSupplyF: fahrenheitFromCelsius(7),
          productionUnits: ['HP-1', 'HP-2', 'HP-3'].map((name) => ({ name, ...unit })),
        },
      });
      const { direction } = estimateIntervals(record, plant);
      const found = (at: number) => DIRECTIONS[direction[at] ?? 0];
      expect(deficits.map(found)).not.toContain('forward');
      expect(deficits.filter((at) => found(at) === 'reverse').length).toBeGreaterThanOrEqual(6);
      const surplus = on.filter((at) => byFlow(at) === 'surplus');
      expect(surplus.map(found)).not.toContain('reverse');
      expect(surplus.filter((at) => found(at) === 'forward').length).toBeGreaterThanOrEqual(35);
    });
  });
});
