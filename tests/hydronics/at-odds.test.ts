import { describe, expect, test } from 'vitest';
import { mostAtOdds } from '@/lib/hydronics/at-odds';
import { SENSOR_ROLES } from '@/lib/hydronics/calibration-types';
import type { Way } from '@/lib/hydronics/contrasts';
import { choleskyInPlace } from '@/lib/hydronics/linear-algebra';
import { randomSource } from '../support/simulation/random';
import { balancedValues, COUNT, drawn, fitted, independent, readingOf, verdictOf, without } from './support/readings';
import type { ReadingName, ReadingValues } from './support/readings';

const ROLE_OF: Readonly<Record<ReadingName, (typeof SENSOR_ROLES)[number]>> = {
  ps: 'primarySupplyTemp',
  pr: 'primaryReturnTemp',
  ss: 'secondarySupplyTemp',
  sr: 'secondaryReturnTemp',
  tb: 'bypassTemp',
  fp: 'primaryFlow',
  fs: 'secondaryFlow',
  fb: 'bypassFlow',
};

/** The sensor named on the supposition of one way. */
function named(values: ReadingValues, way: Way, rated = false, covariance = independent()) {
  return SENSOR_ROLES[mostAtOdds(readingOf(values, covariance), fitted(readingOf(values, covariance), way), rated)];
}

const SHARE = 0.25;
/** Eight sigmas. */
const ERROR: Required<ReadingValues> = { ps: 2, pr: 2, ss: 2, sr: 2, tb: 5, fp: 160, fs: 200, fb: 80 };

describe.each(['forward', 'reverse'] as const)('in %s flow with every sensor', (way) => {
  const values = balancedValues(way, SHARE);
  // Each mixed stream is compared once, with the end it leans on most: these two tie, and the first is named.
  const [mix, far] = way === 'forward' ? (['pr', 'sr'] as const) : (['ss', 'ps'] as const);
  const alone = (Object.keys(ROLE_OF) as ReadingName[]).filter((name) => name !== mix && name !== far);

  for (const sign of [1, -1]) {
    test.each(alone)(
      `a reading of %s that is ${sign > 0 ? 'high' : 'low'} by eight sigmas is the one named`,
      (name) => {
        expect(named({ ...values, [name]: values[name] + sign * ERROR[name] }, way)).toBe(ROLE_OF[name]);
      },
    );

    test.each([mix, far])(`of the two that tie, %s ${sign > 0 ? 'high' : 'low'} names one of them`, (name) => {
      const found = named({ ...values, [name]: values[name] + sign * ERROR[name] }, way);
      expect([ROLE_OF[mix], ROLE_OF[far]]).toContain(found);
    });
  }

  test('none is named where all agree', () => {
    expect(named(values, way)).toBeUndefined();
  });

  test('with noise on all readings the planted one is named far more often than any other', () => {
    const random = randomSource(8, `at odds ${way}`);
    const factor = independent();
    choleskyInPlace(factor, COUNT);
    for (const name of alone) {
      const counts = new Map<string | undefined, number>();
      for (let draw = 0; draw < 150; draw += 1) {
        const noisy = drawn(values, factor, random);
        const found = named({ ...noisy, [name]: noisy[name] + ERROR[name] }, way);
        counts.set(found, (counts.get(found) ?? 0) + 1);
      }
      const right = counts.get(ROLE_OF[name]) ?? 0;
      // Two temperatures of one stream check each other; of three meters any two may be believed.
      expect(right).toBeGreaterThan(name.startsWith('f') ? 75 : 140);
      counts.forEach((count, other) => other !== ROLE_OF[name] && expect(count).toBeLessThan(0.75 * right));
    }
  });

  test('none is named within chance: fewer than one interval in four, whatever the number of comparisons', () => {
    const random = randomSource(9, `within chance ${way}`);
    const factor = independent();
    choleskyInPlace(factor, COUNT);
    for (const missing of [[], ['tb', 'fb'], ['tb', 'fb', 'fs']] satisfies ReadingName[][]) {
      let found = 0;
      for (let draw = 0; draw < 300; draw += 1) {
        if (named(without(drawn(values, factor, random), ...missing), way) !== undefined) found += 1;
      }
      // A squared disagreement beyond the limit of one comparison: 5 % with one, more with more.
      const share = missing.length === 3 ? 0.08 : 0.4;
      expect(found / 300).toBeLessThan(share);
    }
  });
});

describe('the measurement most at odds', () => {
  const values = balancedValues('forward', SHARE);

  test('is nobody where no comparison is left over', () => {
    expect(named(without({ ...values, pr: 51 }, 'ss', 'tb', 'fp', 'fs', 'fb'), 'forward')).toBeUndefined();
    expect(named({}, 'forward')).toBeUndefined();
  });

  test('is the rated flow where that stands in for the primary meter', () => {
    const wrong = { ...values, fp: values.fp + 200 };
    expect(named(wrong, 'forward')).toBe('primaryFlow');
    expect(named(wrong, 'forward', true)).toBe('ratedFlow');
  });

  test('is judged by its own doubt: of two sensors apart, the vague one is rather believed to be off', () => {
    const wrong = { ...values, ss: values.ss + 2 };
    expect(named(wrong, 'forward')).toBe('secondarySupplyTemp');
    const vague = named({ ...values, fb: values.fb + 80 }, 'forward', false, independent({ fb: 60, fp: 5, fs: 5 }));
    expect(vague).toBeUndefined();
  });

  test('stands in the verdict, with the disagreement that made it', () => {
    const verdict = verdictOf(readingOf({ ...values, fs: values.fs + 300 }));
    expect(SENSOR_ROLES[verdict.atOdds]).toBe('secondaryFlow');
    expect(verdict.chiSquare).toBeGreaterThan(20);
    expect(verdictOf(readingOf(values)).atOdds).toBe(-1);
  });
});
