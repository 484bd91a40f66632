import { describe, expect, test } from 'vitest';
import { messagesOf, planFor, readText, samplesOf, wallTime } from './support';

const MINUTE_MS = 60_000;

/** A log of wall times, a row every `stepMinutes`, whose value is the number of minutes since its first row. */
function log(timeZone: string, fromUtc: string, rows: number, stepMinutes: number, clock = timeZone): string {
  const fromMs = Date.parse(fromUtc);
  const lines = Array.from(
    { length: rows },
    (_, i) => `${wallTime(fromMs + i * stepMinutes * MINUTE_MS, clock)},${i * stepMinutes}`,
  );
  return ['time,a', ...lines].join('\n');
}

const plan = (timeZone: string, stepMinutes = 5) =>
  planFor({ timeZone, stepMinutes, columns: [{ column: 'a', role: 'primaryFlow', unit: 'gpm' }] });

describe('days on which clocks change in America/Denver', () => {
  test('autumn: every slot of the 25-hour day is filled once, from its own readings', () => {
    const read = readText(log('America/Denver', '2026-11-01T06:00Z', 25 * 60, 1), plan('America/Denver', 1));
    const samples = samplesOf(read);
    expect(samples).toHaveLength(25 * 60);
    expect(
      samples.filter(([time, value]) => Date.parse(`${time}Z`) !== Date.parse('2026-11-01T06:00Z') + value * MINUTE_MS),
    ).toEqual([]);
    expect(read.report.problems).toEqual([
      {
        code: 'repeated-hour',
        severity: 'warning',
        message:
          'Clocks went back in America/Denver: 2026-11-01 01:00 comes twice. The two passes were told apart by their order in the file.',
        row: 62,
        column: 'time',
        count: 120,
      },
    ]);
  });

  test('spring: the 23-hour day has no hole and no warning when the log followed the clocks', () => {
    const read = readText(log('America/Denver', '2026-03-08T07:00Z', 23 * 60, 1), plan('America/Denver', 1));
    expect(samplesOf(read)).toHaveLength(23 * 60);
    expect(messagesOf(read)).toEqual([]);
  });

  test('spring: a log that did not put its clock forward is read an hour on, and each such row is counted', () => {
    // Etc/GMT+7 is mountain standard time all year.
    const read = readText(log('America/Denver', '2026-03-08T08:00Z', 120, 1, 'Etc/GMT+7'), plan('America/Denver', 1));
    const missing = read.report.problems.find(({ code }) => code === 'missing-hour');
    expect(missing).toMatchObject({ severity: 'warning', row: 62, count: 60 });
    expect(missing?.message).toBe(
      '2026-03-08 02:00 does not exist in America/Denver: clocks went forward. Read as 2026-03-08 03:00. If the logger never changes its clock, choose a zone without summer time.',
    );
    expect(samplesOf(read)).toHaveLength(120);
  });

  test('autumn: when the log holds only one pass, the other hour is a gap and the clocks are named', () => {
    const whole = log('America/Denver', '2026-11-01T06:00Z', 240, 1).split('\n');
    const once = [...whole.slice(0, 121), ...whole.slice(181)].join('\n');
    const read = readText(once, plan('America/Denver', 1));
    expect(messagesOf(read)).toContain(
      '2026-11-01 01:59 is followed by 02:00. A gap of 1 hour; nothing was filled in. The clocks changed in between.',
    );
    expect(samplesOf(read)).toHaveLength(180);
  });
});

test.each([
  ['Asia/Kolkata', '2026-07-19T18:30Z', 1440],
  ['Australia/Lord_Howe', '2026-04-04T13:00Z', 1470],
  ['Australia/Lord_Howe', '2026-10-03T13:30Z', 1410],
])('a local day in %s from %s has %d minutes and comes back minute by minute', (timeZone, from, length) => {
  const samples = samplesOf(readText(log(timeZone, from, length, 1), plan(timeZone, 1)));
  expect(samples).toHaveLength(length);
  expect(samples.filter(([time, value]) => Date.parse(`${time}Z`) !== Date.parse(from) + value * MINUTE_MS)).toEqual(
    [],
  );
});
