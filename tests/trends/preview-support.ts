import { previewTrend, type PreviewOptions, type TrendPreview } from '@/lib/trends';
import { bytesOf } from './support';

/** Two units of 860 gpm in New York. */
export const OPTIONS: PreviewOptions = {
  complete: true,
  timeZone: 'America/New_York',
  unitCount: 2,
  unitFlowGpm: 860,
  productionSupplyF: 44,
  plantStepMinutes: 5,
};

export const previewOf = (text: string | Uint8Array, change: Partial<PreviewOptions> = {}): TrendPreview =>
  previewTrend(typeof text === 'string' ? bytesOf(text) : text, { ...OPTIONS, ...change });

/** One interval of a small invented plant with a decoupler; balances close. */
export interface PlantMoment {
  tps: number;
  tpr: number;
  tss: number;
  tsr: number;
  fp: number;
  fs: number;
  secondOn: number;
  bypassT: number;
  pumpKw: number;
  dp: number;
}

/** A week and more of moments: one unit of 860 gpm up to 480 tons, two beyond; distribution flow follows the load. */
export function plantDays(count: number, stepMinutes: number): PlantMoment[] {
  return Array.from({ length: count }, (_, i) => {
    const hour = (i * stepMinutes) / 60;
    const tons = 500 + 300 * Math.sin(((hour - 9) / 24) * 2 * Math.PI) + 20 * Math.sin(i / 7);
    const secondOn = tons > 480 ? 1 : 0;
    const fp = 860 * (1 + secondOn) + 4 * Math.sin(i);
    const deltaT = 9 + 0.2 * Math.sin(i / 11);
    const fs = (tons * 24) / deltaT;
    const tps = 44 + 0.1 * Math.sin(i / 3);
    const bypass = fp - fs;
    const tss = bypass >= 0 ? tps : tps + (deltaT * -bypass) / fp;
    const tsr = tss + deltaT;
    const tpr = bypass >= 0 ? (fs * tsr + bypass * tps) / fp : tsr;
    const bypassT = (bypass >= 0 ? tps : tsr) + 0.2 * Math.sin(i / 2);
    return {
      tps,
      tpr,
      tss,
      tsr,
      fp,
      fs,
      secondOn,
      bypassT,
      pumpKw: 54 * (fs / 2000) ** 3,
      dp: 12.8 + 8 * (fs / 2000) ** 2,
    };
  });
}

const two = (value: number) => String(value).padStart(2, '0');
/** `07/20/2026 00:05` for minute 5. */
export const monthFirst = (minute: number): string => {
  const d = new Date(Date.UTC(2026, 6, 20, 0, minute));
  return `${two(d.getUTCMonth() + 1)}/${two(d.getUTCDate())}/${d.getUTCFullYear()} ${two(d.getUTCHours())}:${two(d.getUTCMinutes())}`;
};

/** A table whose columns are functions of the moment. */
export function tableOf(
  columns: Readonly<Record<string, (moment: PlantMoment, i: number) => string | number>>,
  options: { rows?: number; stepMinutes?: number; delimiter?: string; time?: (minute: number) => string } = {},
): string {
  const { rows = 2016, stepMinutes = 5, delimiter = ',', time = monthFirst } = options;
  const quote = (cell: string) => (cell.includes(delimiter) ? `"${cell}"` : cell);
  const lines = plantDays(rows, stepMinutes).map((moment, i) => {
    const cells = Object.values(columns).map((each) => {
      const value = each(moment, i);
      return typeof value === 'number' ? String(Math.round(value * 100) / 100) : value;
    });
    return [time(i * stepMinutes), ...cells].map(quote).join(delimiter);
  });
  return [['Timestamp', ...Object.keys(columns)].map(quote).join(delimiter), ...lines, ''].join('\n');
}
