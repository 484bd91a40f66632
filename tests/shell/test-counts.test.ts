import { expect, test } from 'vitest';
import { isGreen, playwrightCounts, summaryLines, vitestCounts } from '@/lib/build/test-counts';

const vitest = {
  numPassedTests: 5,
  numFailedTests: 1,
  numPendingTests: 2,
  numTodoTests: 1,
  testResults: [
    { status: 'failed', assertionResults: [{}] },
    { status: 'failed', assertionResults: [] },
    { status: 'passed', assertionResults: [] },
  ],
};
const counts = (passed: number, failed = 0, skipped = 0) => ({ passed, failed, skipped });

test('a test file that could not be loaded counts as a failure', () => {
  expect(vitestCounts(vitest)).toEqual(counts(5, 2, 3));
});

test('a browser test that passed only when tried again, and an error outside of tests, count as failures', () => {
  const stats = { expected: 7, unexpected: 1, flaky: 2, skipped: 3 };
  expect(playwrightCounts({ stats, errors: [{}] })).toEqual(counts(7, 4, 3));
});

test('a report of another shape is refused rather than counted as nothing', () => {
  expect(() => vitestCounts({})).toThrow();
  expect(() => playwrightCounts({})).toThrow();
});

test('the last line is the plain count when all is green', () => {
  const steps = [
    { name: 'lint', seconds: 1, ok: true },
    { name: 'unit tests', seconds: 1, ok: true, counts: counts(5) },
    { name: 'browser tests', seconds: 1, ok: true, counts: counts(3) },
  ];
  expect(summaryLines(steps).at(-1)).toBe('8 passed, 0 failed');
  expect(isGreen(steps)).toBe(true);
});

test('a red step without tests takes the last line, naming itself', () => {
  const steps = [
    { name: 'lint', seconds: 1, ok: false },
    { name: 'unit tests', seconds: 1, ok: true, counts: counts(5) },
  ];
  expect(summaryLines(steps).at(-1)).toBe('Not green: lint.');
  expect(isGreen(steps)).toBe(false);
});

test('a run without any test is not green', () => {
  const steps = [{ name: 'unit tests', seconds: 1, ok: true, counts: counts(0) }];
  expect(summaryLines(steps).at(-1)).toBe('Not green: no test ran.');
  expect(isGreen(steps)).toBe(false);
});
