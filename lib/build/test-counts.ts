import { z } from 'zod';

export interface TestCounts {
  passed: number;
  failed: number;
  skipped: number;
}

const VitestReport = z.object({
  numPassedTests: z.number(),
  numFailedTests: z.number(),
  numPendingTests: z.number(),
  numTodoTests: z.number(),
  testResults: z.array(z.object({ status: z.string(), assertionResults: z.array(z.unknown()) })),
});

const PlaywrightReport = z.object({
  stats: z.object({ expected: z.number(), unexpected: z.number(), flaky: z.number(), skipped: z.number() }),
  errors: z.array(z.unknown()).default([]),
});

/** What Vitest's JSON report counts; a file that could not be loaded holds no tests and counts as one failure. */
export function vitestCounts(report: unknown): TestCounts {
  const { numPassedTests, numFailedTests, numPendingTests, numTodoTests, testResults } = VitestReport.parse(report);
  const unloaded = testResults.filter((file) => file.status === 'failed' && file.assertionResults.length === 0);
  return { passed: numPassedTests, failed: numFailedTests + unloaded.length, skipped: numPendingTests + numTodoTests };
}

/** What Playwright's JSON report counts; a test that passed only when tried again has failed, and so has a run with errors. */
export function playwrightCounts(report: unknown): TestCounts {
  const { stats, errors } = PlaywrightReport.parse(report);
  return {
    passed: stats.expected,
    failed: stats.unexpected + stats.flaky + errors.length,
    skipped: stats.skipped,
  };
}

export function addCounts(counts: readonly TestCounts[]): TestCounts {
  return counts.reduce(
    (sum, each) => ({
      passed: sum.passed + each.passed,
      failed: sum.failed + each.failed,
      skipped: sum.skipped + each.skipped,
    }),
    { passed: 0, failed: 0, skipped: 0 },
  );
}

export interface StepResult {
  name: string;
  seconds: number;
  ok: boolean;
  counts?: TestCounts | undefined;
}

/** The last lines of a run. Only when every step is green and some test ran do they end with `N passed, 0 failed` alone. */
export function summaryLines(steps: readonly StepResult[]): string[] {
  const counts = addCounts(steps.flatMap((step) => step.counts ?? []));
  const red = steps.filter((step) => !step.ok).map((step) => step.name);
  const lines = steps.map(({ name, seconds, ok, counts: own }) => {
    const tests = own === undefined ? '' : `  ${own.passed} passed, ${own.failed} failed, ${own.skipped} skipped`;
    return `${ok ? 'ok  ' : 'FAIL'} ${seconds.toFixed(1).padStart(7)} s  ${name}${tests}`;
  });
  if (counts.skipped > 0) lines.push(`${counts.skipped} skipped`);
  lines.push(`${counts.passed} passed, ${counts.failed} failed`);
  if (red.length > 0) lines.push(`Not green: ${red.join(', ')}.`);
  else if (counts.passed === 0) lines.push('Not green: no test ran.');
  return lines;
}

export const isGreen = (steps: readonly StepResult[]): boolean => {
  const { passed, failed } = addCounts(steps.flatMap((step) => step.counts ?? []));
  return steps.every((step) => step.ok) && passed > 0 && failed === 0;
};
