import { suggestRoles, type Candidate } from '@/lib/trends/roles/suggest';
import { columnStatistics } from '@/lib/trends/roles/statistics';
import { unitOfCell, unitOfHeading } from '@/lib/trends/unit-text';
import type { PreviewOptions } from '@/lib/trends';

/** Three units of 700 gpm. */
export const PLANT: PreviewOptions = {
  complete: true,
  timeZone: 'America/Chicago',
  unitCount: 3,
  unitFlowGpm: 700,
  productionSupplyF: 44,
  plantStepMinutes: 5,
};

/** A generator of uniform numbers from 0 to 1 that gives the same ones every time. */
export function dice(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

export interface UnitMoment {
  on: number;
  loadPercent: number;
  powerKw: number;
  flowGpm: number;
  leavingF: number;
  enteringF: number;
  evaporatorPsi: number;
}
export interface PanelMoment {
  units: UnitMoment[];
  supplyF: number;
  returnF: number;
  secondarySupplyF: number;
  secondaryReturnF: number;
  primaryGpm: number;
  secondaryGpm: number;
  bypassF: number;
  outdoorF: number;
  wetBulbF: number;
}

/** Days of an invented plant of three units, staged by load; an idle unit's water drifts to the machine room. */
export function panelDays(rows = 600, stepMinutes = 15): PanelMoment[] {
  const next = dice(7);
  let drift = 0;
  const idleF = [62, 66, 70];
  return Array.from({ length: rows }, (_, i) => {
    const hour = (i * stepMinutes) / 60;
    drift = 0.95 * drift + 12 * (next() - 0.5);
    const tons = Math.max(60, 430 + 260 * Math.sin(((hour - 9) / 24) * 2 * Math.PI) + drift);
    const running = tons > 600 ? 3 : tons > 300 ? 2 : 1;
    // The lead changes every day, so that every unit is idle at times.
    const lead = Math.floor(hour / 24) % 3;
    const deltaF = 8.4 + 0.4 * Math.sin(i / 37);
    const primaryGpm = 700 * running;
    const secondaryGpm = (tons * 24) / deltaF + 8 * (next() - 0.5);
    const supplyF = 44 + 0.25 * Math.sin(i / 5);
    const surplus = primaryGpm - secondaryGpm;
    const secondarySupplyF = surplus >= 0 ? supplyF + 0.1 : supplyF + (deltaF * -surplus) / secondaryGpm;
    const secondaryReturnF = secondarySupplyF + deltaF;
    const returnF =
      surplus >= 0 ? (secondaryGpm * secondaryReturnF + surplus * supplyF) / primaryGpm : secondaryReturnF;
    const units = idleF.map((roomF, u) => {
      const on = (u - lead + 3) % 3 < running ? 1 : 0;
      const load = Math.min(1, tons / running / 260);
      return {
        on,
        loadPercent: on ? 100 * load : 0,
        powerKw: on ? 30 + 140 * load : 0.4,
        flowGpm: on ? 700 + 6 * (next() - 0.5) : 0,
        leavingF: on ? supplyF + 0.1 * (u - 1) : roomF + Math.sin(i / 90),
        enteringF: on ? returnF : roomF + 1 + Math.sin(i / 80),
        evaporatorPsi: on ? 7.5 + 0.2 * next() : 0,
      };
    });
    return {
      units,
      supplyF,
      returnF,
      secondarySupplyF,
      secondaryReturnF,
      primaryGpm: primaryGpm + 5 * (next() - 0.5),
      secondaryGpm,
      bypassF: surplus >= 0 ? supplyF : secondaryReturnF,
      outdoorF: 82 + 11 * Math.sin(((hour - 9) / 24) * 2 * Math.PI) + drift / 10,
      wetBulbF: 68 + 4 * Math.sin(((hour - 9) / 24) * 2 * Math.PI),
    };
  });
}

export type Value = (moment: PanelMoment, i: number) => number | string;

/** Candidates as a preview makes them of a table with these columns. */
export function candidatesOf(
  columns: readonly (readonly [heading: string, value: Value, unitCell?: string])[],
  days: readonly PanelMoment[] = DAYS,
): Candidate[] {
  return columns.map(([column, value, unitCell = '']) => {
    const cells = days.map((moment, i) => {
      const cell = value(moment, i);
      return typeof cell === 'number' ? String(Math.round(cell * 100) / 100) : cell;
    });
    const unit = unitOfHeading(column).unit ?? unitOfCell(unitCell);
    return { column, unitCell, statistics: columnStatistics(cells, '.', unit) };
  });
}

export const DAYS = panelDays();

export const suggestedOf = (
  columns: readonly (readonly [heading: string, value: Value, unitCell?: string])[],
  change: Partial<PreviewOptions> = {},
) => suggestRoles(candidatesOf(columns), { ...PLANT, ...change });
