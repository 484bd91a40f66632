import { describe, expect, test } from 'vitest';
import { SITES, weekCsv } from '@/fixtures/demo';
import { previewOf } from './preview-support';

// The demo's exports come from a generator that knows each column's role; the suggestion sees only the file.
describe.each(Object.values(SITES))('the export of the demo’s $key plant', (site) => {
  const units = site.sensors.flatMap(({ role, unitIndex }) => (role === 'unitStatus' ? [unitIndex ?? 0] : []));
  const preview = previewOf(weekCsv(site.key, '2026-07-28'), {
    timeZone: site.script.timeZone,
    unitCount: Math.max(...units),
    unitFlowGpm: undefined,
  });

  test('every column is suggested in its role, unit and unit number, and none is left to a person', () => {
    const suggested = preview.columns.map(({ column, role, unit, unitIndex }) => ({ column, role, unit, unitIndex }));
    const known = site.sensors.map(({ column, role, unit, unitIndex }) => ({
      column,
      role,
      unit: role === 'ignore' ? null : unit,
      unitIndex: unitIndex ?? null,
    }));
    expect(suggested).toEqual(known);
    expect(preview.columns.filter(({ confidence }) => confidence < 0.5)).toEqual([]);
  });

  test('its times are read at five minutes and nothing but missing words and gaps is reported', () => {
    expect(preview.stepMinutes).toBe(5);
    expect(preview.timestamp.form).toBe(site.style.stamp);
    expect(preview.problems.filter(({ code }) => code !== 'missing-word' && code !== 'gap')).toEqual([]);
  });
});
