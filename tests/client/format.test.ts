import { expect, test } from 'vitest';
import * as format from '@/lib/client/format';

test.each([
  [1720, '1,720'],
  [-966, '\u2212966'],
  [1_234_567.4, '1,234,567'],
  [0, '0'],
  [-0.4, '0'],
  [null, '-'],
  [undefined, '-'],
  [Number.NaN, '-'],
])('a whole number %s prints as %s', (value, text) => {
  expect(format.formatNumber(value)).toBe(text);
});

test('bypass flow and changes always carry their sign, and nothing at zero', () => {
  expect(format.formatBypass(571)).toBe('+571');
  expect(format.formatBypass(-966.4)).toBe('\u2212966');
  expect(format.formatBypass(0.2)).toBe('0');
  expect(format.formatDeltaTChange(3.44)).toBe('+3.4');
});

test('a figure and its negative round alike, away from zero', () => {
  expect(format.formatNumber(0.25, { decimals: 1 })).toBe('0.3');
  expect(format.formatNumber(-0.25, { decimals: 1 })).toBe('\u22120.3');
  expect(format.roundHalfAway(1.005, 2)).toBe(1.01);
});

test('temperatures carry one decimal, flows and loads none, and L/s one', () => {
  expect(format.formatTemperature(49.06)).toBe('49.1');
  expect(format.formatFlow(1719.6)).toBe('1,720');
  expect(format.formatLoad(976.5)).toBe('977');
  expect(format.formatFlow(100, 'si')).toBe('6.3');
});

test('a temperature is converted with its zero, a difference without', () => {
  expect(format.formatTemperature(44, 'si')).toBe('6.7');
  expect(format.formatDeltaT(12.6, 'si')).toBe('7.0');
  expect(format.formatPlusMinus(1.8, 'temperature', 'si')).toBe('±1.0');
});

test('a cooling load of 100 tons is 352 kW in the metric system', () => {
  // 1 ton of refrigeration = 3.51685 kW (NIST SP 811, 2008, appendix B.8)
  expect(format.formatLoad(100, 'si')).toBe('352');
});

test('a figure and its unit are joined by a space that does not break, and a missing figure has no unit', () => {
  expect(format.withUnit('49.1', '°F')).toBe('49.1\u00a0°F');
  expect(format.withUnit('-', '°F')).toBe('-');
});

test.each([
  [0, '0:00'],
  [585, '9:45'],
  [770.4, '12:50'],
  [59.6, '1:00'],
  [null, '-'],
])('%s minutes print as %s', (minutes, text) => {
  expect(format.formatHoursMinutes(minutes)).toBe(text);
});

test('money has two decimals within an hour and none over a week', () => {
  expect(format.formatMoney(11.288, 'hour')).toBe('11.29');
  expect(format.formatMoney(1177.4, 'week')).toBe('1,177');
});

test('a probability is never rounded up to certainty', () => {
  expect(format.formatProbability(0.9999)).toBe('.99');
  expect(format.formatProbability(1)).toBe('1.00');
  expect(format.formatProbability(0.705)).toBe('.71');
  expect(format.formatProbability(0)).toBe('.00');
  expect(format.formatProbability(null)).toBe('-');
});

test('an interval is missing when either of its bounds is', () => {
  expect(format.formatInterval(-1059, -872, 'flow')).toBe('\u22121,059 to \u2212872');
  expect(format.formatInterval(-1059, null, 'flow')).toBe('-');
});

test.each([
  [0, '0\u00a0kB'],
  [12, '1\u00a0kB'],
  [1_200_000, '1.2\u00a0MB'],
  [2_000_000_000, '2.0\u00a0GB'],
])('%s bytes print as %s', (bytes, text) => {
  expect(format.formatBytes(bytes)).toBe(text);
});
