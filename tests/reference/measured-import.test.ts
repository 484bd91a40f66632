// The measured laboratory plant (NIST Intelligent Building Agents Laboratory, doi 10.18434/mds2-3058) through the importer.
// Check values: computed with numpy on the files as they are, over minutes with a chiller on and both flows above 5 gpm.
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { createTrendReader, type ColumnMapping, type TrendPreview } from '@/lib/trends';
import { confirmedPlan, previewTexts } from '../trends/gallery-support';

const FOLDER = path.resolve(import.meta.dirname, '../../../shared/data/nist_ibal/csv');

const DAYS = [
  ['Tucson_Shift_Default', '2026-08-28', 834, 5.019, 197, 245, 392],
  ['Tucson_Eff_MPC', '2026-08-28', 821, 4.787, 821, 0, 0],
  ['Tucson_Mod_Default', '2026-08-28', 354, 5.489, 263, 40, 51],
  ['Atlanta_Mod_Default', '2026-08-26', 356, 4.661, 267, 16, 73],
  ['Atlanta_Shed_Default', '2026-08-26', 836, 4.623, 759, 12, 65],
] as const;

/** What the README of the data says each column is: the roles a person gives. */
const ROLES: readonly ColumnMapping[] = [
  { column: 'ch1_on', role: 'unitStatus', unit: 'on/off', unitIndex: 1 },
  { column: 'ch2_on', role: 'unitStatus', unit: 'on/off', unitIndex: 2 },
  { column: 'ch1_f_e', role: 'unitFlow', unit: 'gpm', unitIndex: 1 },
  { column: 'ch2_f_e', role: 'unitFlow', unit: 'gpm', unitIndex: 2 },
  { column: 'ch1_e_in_rtd', role: 'primaryReturnTemp', unit: 'degF' },
  { column: 'ch1_e_out_rtd', role: 'unitLeavingTemp', unit: 'degF', unitIndex: 1 },
  { column: 'ch2_e_out_rtd', role: 'unitLeavingTemp', unit: 'degF', unitIndex: 2 },
  { column: 'sl_f', role: 'secondaryFlow', unit: 'gpm' },
];
const DEAD_BAND_GPM = 1;

/** One day's columns, minute by minute from its first instant. */
function imported(day: string): { preview: TrendPreview; minutes: number[][]; fromMs: number | null; rows: number } {
  const bytes = readFileSync(path.join(FOLDER, `${day}.csv`));
  const preview = previewTexts([{ name: `${day}.csv`, bytes }], {
    timeZone: 'UTC',
    unitFlowGpm: 18,
    plantStepMinutes: 1,
  });
  const reader = createTrendReader({ ...confirmedPlan(preview, 0, 1), columns: [...ROLES] });
  reader.push(bytes);
  const minutes = ROLES.map((): number[] => []);
  const days = reader.finish().sort((a, b) => a.day.localeCompare(b.day));
  for (const { column, values } of days) minutes[column]!.push(...values);
  const { fromMs, rowsRead } = reader.report();
  return { preview, minutes, fromMs, rows: rowsRead };
}

describe('days of a laboratory plant, with the year and the roles as the only help', () => {
  if (!existsSync(FOLDER)) {
    test('are not beside the project (shared/data/nist_ibal): nothing was imported', () => {
      expect(existsSync(FOLDER)).toBe(false);
    });
    return;
  }

  describe.each(DAYS)('%s', (name, date, onMinutes, deltaTF, surplus, neutral, deficit) => {
    const { preview, minutes, fromMs, rows } = imported(name);
    const [on1, on2, flow1, flow2, returnF, leaving1, leaving2, secondary] = minutes;

    test('imports as 1,440 minutes of its day: month and day with two blanks, no year, hour 24 at its end', () => {
      expect(preview.timestamp).toEqual({ columns: ['date_time'], form: 'month/day', year: 2026, stamps: 'end' });
      expect(preview.problems.map(({ code }) => code).sort()).toEqual(['end-stamps', 'no-year']);
      expect([rows, preview.stepMinutes]).toEqual([1440, 1]);
      // The first stamp, 00:01, ends the first minute of the day.
      expect(new Date(fromMs!).toISOString()).toBe(`${date}T00:00:00.000Z`);
      expect(secondary!.filter((value) => !Number.isNaN(value))).toHaveLength(1440);
    });

    test('has the published minutes on, delta-T, and minutes of surplus, balance and deficit', () => {
      const counts = { on: 0, surplus: 0, neutral: 0, deficit: 0 };
      let sum = 0;
      for (let minute = 0; minute < secondary!.length; minute++) {
        const primary = flow1![minute]! + flow2![minute]!;
        const gap = primary - secondary![minute]!;
        const running = on1![minute] === 1 || on2![minute] === 1;
        if (!running || !(primary > 5) || !(secondary![minute]! > 5)) continue;
        const supplyF = (flow1![minute]! * leaving1![minute]! + flow2![minute]! * leaving2![minute]!) / primary;
        counts.on++;
        sum += returnF![minute]! - supplyF;
        counts[gap > DEAD_BAND_GPM ? 'surplus' : gap < -DEAD_BAND_GPM ? 'deficit' : 'neutral']++;
      }
      expect(counts).toEqual({ on: onMinutes, surplus, neutral, deficit });
      expect(sum / counts.on).toBeCloseTo(deltaTF, 3);
    });
  });
});
