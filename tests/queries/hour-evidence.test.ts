import { describe, expect, test } from 'vitest';
import { hourEvidence } from '@/lib/queries/hour-evidence';
import { workOutHour, type HourFacts } from '@/lib/queries/hour-facts';
import { FORWARD_HOUR, REVERSE_HOUR, withRow } from './hour-facts';

const plain = (text: string) => text.replaceAll('\u00a0', ' ').replaceAll('\u2212', '-');
const told = (hour: HourFacts, units: 'ip' | 'si' = 'ip') =>
  Object.fromEntries(hourEvidence(hour, units).map(({ claim, detail }) => [claim, plain(detail)]));
const measured = (hour: HourFacts, change: Partial<HourFacts['measured']>): HourFacts => ({
  ...hour,
  measured: { ...hour.measured, ...change },
});
const workedOut = (hour: HourFacts, change: Partial<HourFacts['workedOut']>): HourFacts => ({
  ...hour,
  workedOut: { ...hour.workedOut, ...change },
});

describe('the evidence of a reverse hour', () => {
  const evidence = told(REVERSE_HOUR);

  test('says what the meters said, with the difference of the printed figures and its interval', () => {
    // 1.6449 * sqrt((0.03 * 1684)^2 + (0.02 * 2671)^2) = 121
    expect(evidence['The meters say reverse.']).toBe('Production 1,684 gpm, distribution 2,671 gpm: -987 ±121 gpm.');
  });

  test('says what the temperatures said', () => {
    // 1.6449 * sqrt(2) * 0.2 = 0.47
    expect(evidence['The temperatures say reverse.']).toBe(
      'Supply to the buildings stood 5.6 ±0.5 °F above production supply, and the two returns agree within 0.1 °F.',
    );
  });

  test('says what they say together, never with certainty', () => {
    expect(evidence['Together they say reverse.']).toBe(
      'Probability of reverse above 0.999; bypass -966 gpm (-1,059 to -872); of 60 min: reverse 60.',
    );
  });

  test('says which share of the supply was return water', () => {
    expect(evidence['The blend.']).toBe(
      '36 % (32 to 39 %) of the water to the buildings was their own return, so supply left production at 44.2 °F and went out at 49.1 °F.',
    );
  });

  test('says what the flow came to, so that needed and excess add up as printed', () => {
    expect(evidence['The flow.']).toBe(
      'At its expected delta-T of 13.3 °F this load needs 1,767 gpm; 2,686 gpm flowed, 919 gpm more. 233 gpm of that the plant could do without as it is built. It took 81 kWh more, 11.29 USD.',
    );
  });

  test('names the cause and the staging', () => {
    expect(evidence['The staging.']).toBe('2 of 3 units ran at 977 tons, 65 % of design.');
    expect(evidence['The cause: reverse flow.']).toMatch(/stopping the reverse flow alone .* Confidence 0\.70\./);
  });

  test('in SI is told in SI throughout', () => {
    const text = Object.values(told(REVERSE_HOUR, 'si')).join(' ');
    expect(text).toContain('Production 106.2 L/s, distribution 168.5 L/s: -62.3 ±7.6 L/s.');
    expect(text).toContain('3.1 ±0.3 K above production supply');
    expect(text).not.toMatch(/gpm|°F|tons/);
  });
});

describe('the evidence of a forward hour', () => {
  const evidence = told(FORWARD_HOUR);

  test('comes from the meters, the common pipe, the temperatures and the dilution', () => {
    expect(evidence['The meters say forward.']).toMatch(/: \+400 ±/);
    expect(evidence['The common pipe held supply water.']).toBe(
      'Its meter read +410 gpm; its water stood at 44.2 °F, between a production supply of 44.0 °F and a building return of 56.5 °F.',
    );
    expect(evidence['The temperatures say forward.']).toMatch(/return to production stood 4\.2 ±0\.5 °F below/);
    expect(evidence['Together they say forward.']).toMatch(/^Probability of reverse below 0\.001; bypass \+400 gpm/);
    expect(evidence['The dilution.']).toMatch(/^33 % \(29 to 38 %\) of the production water crossed over unused/);
    expect(evidence['The staging.']).toMatch(/: 450 tons more than the smallest set/);
  });

  test('of a meter that knows no direction says so and gives no sign', () => {
    const text = told(measured(FORWARD_HOUR, { bypassMeterSigned: false }))['The common pipe held supply water.'];
    expect(text).toMatch(/^Its meter, which does not know the direction, read 410 gpm;/);
  });
});

describe('evidence that does not carry the answer says so', () => {
  test('a difference within the meters’ interval', () => {
    expect(told(measured(REVERSE_HOUR, { secondaryFlowGpm: 1700 }))).toHaveProperty([
      'The meters do not say which way.',
    ]);
  });

  test('a meter or all meters missing', () => {
    expect(told(measured(REVERSE_HOUR, { primaryFlowGpm: NaN }))['One meter is silent.']).toMatch(
      /The production side has no flow/,
    );
    expect(told(measured(REVERSE_HOUR, { primaryFlowGpm: NaN, secondaryFlowGpm: NaN }))).toHaveProperty([
      'No meter speaks.',
    ]);
  });

  test('temperatures that say both, or nothing, or are not there', () => {
    expect(told(measured(REVERSE_HOUR, { primaryReturnF: 55 }))['The temperatures say both ways.']).toMatch(
      /a sensor is off/,
    );
    expect(told(measured(REVERSE_HOUR, { secondarySupplyF: 44.2 }))).toHaveProperty([
      'The temperatures do not say which way.',
    ]);
    const none = measured(REVERSE_HOUR, { secondarySupplyF: NaN, primaryReturnF: NaN });
    expect(Object.keys(told(none)).join()).not.toMatch(/temperatures/);
  });

  test('a direction that is not known, with the reason most of its minutes had', () => {
    const hour = workedOut(REVERSE_HOUR, {
      direction: 'unknown',
      minutes: { forward: 0, reverse: 10, still: 0, unknown: 50 },
      reasons: [
        { reason: 'too near balance', minutes: 45 },
        { reason: 'sensors contradict', minutes: 5 },
      ],
      reverseProbability: 0.61,
    });
    expect(told(hour)['Together they do not settle it.']).toBe(
      'Probability of reverse 0.61; bypass -966 gpm (-1,059 to -872); of 60 min: reverse 10, unknown 50. Why not: too near balance.',
    );
    expect(told(hour)).not.toHaveProperty(['The blend.']);
  });

  test('an unsteady hour and one with half its inputs', () => {
    const hour = withRow(workedOut(REVERSE_HOUR, { steadyIntervals: 3 }), { quality: 0.5 });
    expect(told(hour)['Read with care.']).toBe(
      'Only 3 of 12 intervals were steady, and 50 % of the inputs were measured and passed the checks.',
    );
    expect(told(REVERSE_HOUR)).not.toHaveProperty(['Read with care.']);
  });

  test('an hour that is not low, and one without a single cause', () => {
    expect(told(withRow(REVERSE_HOUR, { low: 0, cause: 'none' }))).toHaveProperty(['Not a low hour.']);
    expect(told(withRow(REVERSE_HOUR, { cause: 'none', causeConfidence: null }))).toHaveProperty(['No single cause.']);
  });

  test('an hour of which nothing is known yields sentences without a number that is not one', () => {
    const nothing: HourFacts = {
      ...REVERSE_HOUR,
      row: Object.fromEntries(
        Object.entries(REVERSE_HOUR.row).map(([name, value]) => [
          name,
          typeof value === 'number' && name !== 'low' ? null : value,
        ]),
      ) as HourFacts['row'],
      measured: Object.fromEntries(
        Object.keys(REVERSE_HOUR.measured).map((name) => [name, NaN]),
      ) as unknown as HourFacts['measured'],
      workedOut: {
        ...REVERSE_HOUR.workedOut,
        direction: 'unknown',
        minutes: { forward: 0, reverse: 0, still: 0, unknown: 60 },
        reverseProbability: NaN,
        bypassFlowGpm: { mean: NaN, lo: NaN, hi: NaN },
        blendedSupplyF: { mean: NaN, lo: NaN, hi: NaN },
        primaryFlowGpm: NaN,
        secondaryFlowGpm: NaN,
      },
      unitsRunning: null,
    };
    const text = JSON.stringify(told(nothing));
    expect(text).not.toMatch(/NaN|null|undefined|Infinity/);
    expect(told(nothing)).toHaveProperty(['No meter speaks.']);
  });
});

describe('sensors in the evidence of an hour', () => {
  test('say first what the calibration took out of them, in the reader’s units', () => {
    const corrected = [
      { role: 'secondarySupplyTemp', kind: 'offset', value: 0.6 },
      { role: 'primaryFlow', kind: 'gain', value: -2.1 },
    ] as const;
    const [first] = hourEvidence({ ...REVERSE_HOUR, corrected }, 'ip');
    expect(first?.claim).toBe('Sensors were corrected.');
    expect(plain(first?.detail ?? '')).toBe(
      'By the record of the month secondary supply reads 0.6 °F warm and primary flow reads 2.1 % low; what is worked out is free of that.',
    );
    expect(told({ ...REVERSE_HOUR, corrected }, 'si')['Sensors were corrected.']).toContain('0.3 K warm');
    expect(told(REVERSE_HOUR)).not.toHaveProperty('Sensors were corrected.');
  });

  test('are named when the measurements do not fit in most intervals, the one most at odds first', () => {
    const misfit = (fit: HourFacts['workedOut']['fit']) =>
      told(workedOut(REVERSE_HOUR, { fit }))['The measurements do not fit together.'];
    expect(misfit({ told: 12, beyond: 9, atOdds: 'secondarySupplyTemp' })).toBe(
      'In 9 of 12 intervals they differ by more than their uncertainties allow. The secondary supply is the most at odds with the rest: check it first.',
    );
    expect(misfit({ told: 12, beyond: 12, atOdds: null })).toContain('No one of them stands out.');
    expect(misfit({ told: 12, beyond: 6, atOdds: 'bypassTemp' })).toBeUndefined();
    expect(misfit({ told: 0, beyond: 0, atOdds: null })).toBeUndefined();
  });

  test('are judged by chi-square against its limit for as many comparisons as there are', () => {
    const channels: Record<string, number[]> = {
      state: [1, 1, 1, 1],
      direction: [2, 2, 2, 2],
      // 0.95 points: 3.84 with one degree of freedom, 5.99 with two (any table)
      chi_square: [4, 4, 7, NaN],
      redundancy: [1, 2, 2, NaN],
      at_odds: [2, -1, 2, NaN],
    };
    const { fit } = workOutHour([0, 1, 2, 3], 15, (name, slot) => channels[name]?.[slot] ?? NaN);
    expect(fit).toEqual({ told: 3, beyond: 2, atOdds: 'secondarySupplyTemp' });
  });
});
