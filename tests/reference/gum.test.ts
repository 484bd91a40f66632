// JCGM 100:2008 (GUM), Annex H; fixtures/reference/gum.json says where the numbers were read and which were computed.
import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/gum.json';
import { studentTQuantile } from '@/lib/hydronics/distributions';
import { minimise } from '@/lib/hydronics/least-squares';
import { correlationOf, expandedUncertainty, meansOf, propagate } from '@/lib/hydronics/propagate';
import type { Measurand, PropagateInputs } from '@/lib/hydronics/propagate';
import { diagonalCovariance } from '@/lib/hydronics/reconcile';

const rectangular = (halfWidth: number) => halfWidth / Math.sqrt(3);
/** Arcsine distribution: a quantity that cycles between two limits. */
const cycling = (halfWidth: number) => halfWidth / Math.SQRT2;

describe(table.h1.name, () => {
  const given = table.h1;
  const { computed, printed } = given;
  const difference = propagate(
    {
      values: Float64Array.of(given.differenceNm.value, 0, 0),
      covariance: diagonalCovariance(given.differenceNm.parts.map((part) => part.sigma)),
      freedom: Float64Array.from(given.differenceNm.parts, (part) => part.freedom),
    },
    1,
    ([mean = 0, random = 0, systematic = 0], values, slopes) => {
      values[0] = mean + random + systematic;
      slopes.fill(1);
    },
  );
  const temperatureSigma = Math.hypot(given.temperatureAwayK.meanSigma, cycling(given.temperatureAwayK.cycleHalfWidth));
  // l = ls + d - ls (da theta + as dtheta)
  const endGauge: Measurand = ([ls = 0, d = 0, da = 0, theta = 0, as = 0, dtheta = 0], values, slopes) => {
    values[0] = ls + d - ls * (da * theta + as * dtheta);
    slopes.set([1 - (da * theta + as * dtheta), 1, -ls * theta, -ls * da, -ls * dtheta, -ls * as]);
  };
  const found = propagate(
    {
      values: Float64Array.of(
        given.standardNm.value,
        given.differenceNm.value,
        given.expansionDifferencePerK.value,
        given.temperatureAwayK.value,
        given.expansionPerK.value,
        given.temperatureDifferenceK.value,
      ),
      covariance: diagonalCovariance([
        given.standardNm.sigma,
        difference.sigmas[0] ?? Number.NaN,
        rectangular(given.expansionDifferencePerK.halfWidth),
        temperatureSigma,
        rectangular(given.expansionPerK.halfWidth),
        rectangular(given.temperatureDifferenceK.halfWidth),
      ]),
      freedom: Float64Array.of(
        given.standardNm.freedom,
        difference.freedom[0] ?? Number.NaN,
        given.expansionDifferencePerK.freedom,
        Infinity,
        Infinity,
        given.temperatureDifferenceK.freedom,
      ),
    },
    1,
    endGauge,
  );

  test('has the length and the combined standard uncertainty of the guide', () => {
    expect(found.values[0]).toBe(computed.lengthNm);
    expect(found.sigmas[0]).toBeCloseTo(computed.sigmaNm, 3);
    expect(Math.round(found.sigmas[0] ?? 0)).toBe(printed.sigmaNm);
    expect(difference.freedom[0]).toBeCloseTo(computed.differenceFreedom, 1);
  });

  test('has the computed terms, those that vanish to first order being zero', () => {
    const sizes = Array.from(found.terms, Math.abs);
    [sizes[0], sizes[1], sizes[2], sizes[5]].forEach((term, i) => {
      expect(term).toBeCloseTo(computed.termsNm[i] ?? Number.NaN, 4);
    });
    expect([sizes[3], sizes[4]]).toEqual([0, 0]);
  });

  test('has the effective degrees of freedom, and the 99 % interval with them rounded down as the guide does', () => {
    expect(found.freedom[0]).toBeCloseTo(computed.freedom, 2);
    const whole = Math.floor(found.freedom[0] ?? 0);
    expect(whole).toBe(printed.freedom);
    expect(studentTQuantile(0.995, whole)).toBeCloseTo(computed.t99At16, 4);
    const expanded = expandedUncertainty(found.sigmas[0] ?? 0, whole, 0.99);
    expect(expanded).toBeCloseTo(computed.expanded99Nm, 1);
    // The guide multiplies the rounded 32 by 2.92.
    expect(expandedUncertainty(printed.sigmaNm, whole, 0.99)).toBeGreaterThan(printed.expanded99Nm - 0.5);
  });

  test('lacks the second-order terms, which the guide adds by hand: products of two uncertainties of zero slope', () => {
    const ls = given.standardNm.value;
    const second = [
      ls * rectangular(given.expansionDifferencePerK.halfWidth) * temperatureSigma,
      ls * rectangular(given.expansionPerK.halfWidth) * rectangular(given.temperatureDifferenceK.halfWidth),
    ];
    second.forEach((term, i) => expect(term).toBeCloseTo(computed.secondOrderTermsNm[i] ?? Number.NaN, 2));
    expect(Math.hypot(found.sigmas[0] ?? 0, ...second)).toBeCloseTo(computed.sigmaWithSecondOrderNm, 2);
  });
});

describe(table.h2.name, () => {
  const { volts, milliamperes, radians, computed, printed, roundedInputs } = table.h2;
  /** R = V cos(phi) / I, X = V sin(phi) / I, Z = V / I; I in A. */
  const impedance: Measurand = ([v = 0, i = 0, phi = 0], values, slopes) => {
    const [z, cos, sin] = [v / i, Math.cos(phi), Math.sin(phi)];
    values.set([z * cos, z * sin, z]);
    slopes.set([cos / i, (-z * cos) / i, -z * sin, sin / i, (-z * sin) / i, z * cos, 1 / i, -z / i, 0]);
  };
  const inputs = meansOf([volts, milliamperes.map((current) => current / 1000), radians]);
  const found = propagate(inputs, 3, impedance);
  const pairs = [
    [0, 1],
    [0, 2],
    [1, 2],
  ] as const;
  const correlations = (covariance: Float64Array) => pairs.map(([i, j]) => correlationOf(covariance, 3, i, j));
  const closeTo = (values: ArrayLike<number>, expected: readonly number[], digits: number) =>
    expected.forEach((value, i) => expect(values[i]).toBeCloseTo(value, digits));

  test('has the means, uncertainties and correlations of the five readings', () => {
    closeTo([inputs.values[0] ?? 0, (inputs.values[1] ?? 0) * 1000, inputs.values[2] ?? 0], computed.means, 9);
    const sigma = (i: number) => Math.sqrt(inputs.covariance[i * 4] ?? 0);
    expect(sigma(0)).toBeCloseTo(computed.sigmas[0] ?? 0, 6);
    expect(sigma(1) * 1000).toBeCloseTo(computed.sigmas[1] ?? 0, 5);
    expect(sigma(2)).toBeCloseTo(computed.sigmas[2] ?? 0, 6);
    closeTo(correlations(inputs.covariance), computed.correlations, 4);
  });

  test('has the guide’s resistance, reactance and impedance with their correlations', () => {
    closeTo(found.values, computed.ohms, 5);
    closeTo(found.sigmas, computed.ohmSigmas, 6);
    closeTo(correlations(found.covariance), computed.ohmCorrelations, 5);
    // One in the last printed digit: the guide rounds on the way.
    printed.ohms.forEach((value, i) => expect(Math.abs((found.values[i] ?? 0) - value)).toBeLessThan(6e-4));
    printed.ohmSigmas.forEach((value, i) => expect(Math.abs((found.sigmas[i] ?? 0) - value)).toBeLessThan(1e-3));
    closeTo(correlations(found.covariance), printed.ohmCorrelations, 3);
  });

  test('from the guide’s rounded inputs has slightly other uncertainties, as computed', () => {
    const sigmas = [0.0032, 0.0095e-3, 0.00075];
    const rounded: PropagateInputs = { values: inputs.values, covariance: diagonalCovariance(sigmas) };
    pairs.forEach(([i, j], at) => {
      const shared = ([-0.36, 0.86, -0.65][at] ?? 0) * (sigmas[i] ?? 0) * (sigmas[j] ?? 0);
      rounded.covariance[i * 3 + j] = shared;
      rounded.covariance[j * 3 + i] = shared;
    });
    const again = propagate(rounded, 3, impedance);
    closeTo(again.sigmas, roundedInputs.ohmSigmas, 6);
    closeTo(correlations(again.covariance), roundedInputs.ohmCorrelations, 5);
  });

  test('is wrong when the readings are taken as uncorrelated: the resistance looks two and a half times as uncertain', () => {
    const diagonal = diagonalCovariance(Array.from(inputs.values, (_, i) => Math.sqrt(inputs.covariance[i * 4] ?? 0)));
    const naive = propagate({ values: inputs.values, covariance: diagonal }, 3, impedance);
    expect((naive.sigmas[0] ?? 0) / (found.sigmas[0] ?? 1)).toBeGreaterThan(2.5);
    expect((naive.sigmas[1] ?? 0) / (found.sigmas[1] ?? 1)).toBeLessThan(0.8);
    expect(Math.sign(correlationOf(naive.covariance, 3, 0, 1))).toBe(1);
    expect(Math.sign(correlationOf(found.covariance, 3, 0, 1))).toBe(-1);
  });
});

describe(table.h3.name, () => {
  const { referenceC, shownC, correctionC, computed } = table.h3;
  const fit = minimise(Float64Array.of(0, 0), ([intercept = 0, slope = 0], normal, gradient) => {
    let cost = 0;
    shownC.forEach((shown, i) => {
      const x = shown - referenceC;
      const residual = intercept + slope * x - (correctionC[i] ?? 0);
      cost += 0.5 * residual * residual;
      [1, x].forEach((slopeHere, row) => {
        gradient[row] = (gradient[row] ?? 0) + slopeHere * residual;
        [1, x].forEach((other, column) => {
          normal[row * 2 + column] = (normal[row * 2 + column] ?? 0) + slopeHere * other;
        });
      });
    });
    return cost;
  });
  const variance = (2 * fit.cost) / (shownC.length - 2);
  const line = { values: fit.parameters, covariance: fit.covariance.map((value) => value * variance) };

  test('has the guide’s line with its uncertainties and correlation', () => {
    expect(line.values[0]).toBeCloseTo(computed.intercept, 6);
    expect(line.values[1]).toBeCloseTo(computed.slope, 6);
    expect(Math.sqrt(line.covariance[0] ?? 0)).toBeCloseTo(computed.interceptSigma, 6);
    expect(Math.sqrt(line.covariance[3] ?? 0)).toBeCloseTo(computed.slopeSigma, 6);
    expect(correlationOf(line.covariance, 2, 0, 1)).toBeCloseTo(computed.correlation, 5);
    expect(Math.sqrt(variance)).toBeCloseTo(computed.residualSigma, 7);
    expect(2 * fit.cost).toBeCloseTo(computed.sumOfSquares, 12);
  });

  const at30: Measurand = ([intercept = 0, slope = 0], values, slopes) => {
    values[0] = intercept + slope * (30 - referenceC);
    slopes.set([1, 30 - referenceC]);
  };

  test('predicts the correction at 30 C', () => {
    const found = propagate(line, 1, at30);
    expect(found.values[0]).toBeCloseTo(computed.at30C, 6);
    expect(found.sigmas[0]).toBeCloseTo(computed.at30Sigma, 6);
  });

  test('would be given almost twice the uncertainty at 30 C if the line’s two numbers were taken as uncorrelated', () => {
    const diagonal = Float64Array.of(line.covariance[0] ?? 0, 0, 0, line.covariance[3] ?? 0);
    const naive = propagate({ values: line.values, covariance: diagonal }, 1, at30);
    expect((naive.sigmas[0] ?? 0) / computed.at30Sigma).toBeGreaterThan(1.7);
  });
});
