import { celsiusDeltaFromFahrenheitDelta, celsiusFromFahrenheit, kilowattsFromTons } from '../units';
import { litresPerSecondFromGpm } from '../units';

/**
 * How numbers are printed. Values come in the units kept inside (deg F, gpm, tons, kWh); text goes out in the
 * reader's system. Missing is a hyphen, zero is 0, the minus is U+2212, thousands are parted by a comma.
 */

export type UnitSystem = 'ip' | 'si';
export type Maybe = number | null | undefined;

export const MINUS = '\u2212';
export const NO_BREAK_SPACE = '\u00a0';
export const EN_DASH = '\u2013';
export const MISSING = '-';

export type PrintedQuantity = 'temperature' | 'temperatureDifference' | 'flow' | 'load';

const UNIT_LABELS: Readonly<Record<UnitSystem, Readonly<Record<PrintedQuantity, string>>>> = {
  ip: { temperature: '°F', temperatureDifference: '°F', flow: 'gpm', load: 'tons' },
  si: { temperature: '°C', temperatureDifference: 'K', flow: 'L/s', load: 'kW' },
};

/** Decimals of a printed quantity: temperatures carry one, gpm, tons and kW none, L/s one (1 L/s is 16 gpm). */
const DECIMALS: Readonly<Record<UnitSystem, Readonly<Record<PrintedQuantity, number>>>> = {
  ip: { temperature: 1, temperatureDifference: 1, flow: 0, load: 0 },
  si: { temperature: 1, temperatureDifference: 1, flow: 1, load: 0 },
};

const CONVERT: Readonly<Record<PrintedQuantity, (value: number) => number>> = {
  temperature: celsiusFromFahrenheit,
  temperatureDifference: celsiusDeltaFromFahrenheitDelta,
  flow: litresPerSecondFromGpm,
  load: kilowattsFromTons,
};

export const unitLabel = (quantity: PrintedQuantity, units: UnitSystem): string => UNIT_LABELS[units][quantity];
export const decimalsOf = (quantity: PrintedQuantity, units: UnitSystem): number => DECIMALS[units][quantity];

/** A stored value in the reader's system; missing stays NaN. */
export function toPrinted(value: Maybe, quantity: PrintedQuantity, units: UnitSystem): number {
  if (value === null || value === undefined) return Number.NaN;
  return units === 'ip' ? value : CONVERT[quantity](value);
}

/**
 * Rounds half away from zero, so that a figure and its negative print alike.
 *
 * Gaps    NaN in, NaN out.
 */
export function roundHalfAway(value: number, decimals: number): number {
  const scale = 10 ** decimals;
  // The relative nudge mends products such as 1.005 * 100 = 100.49999999999999.
  const rounded = Math.round(Math.abs(value) * scale * (1 + 2 * Number.EPSILON)) / scale;
  return value < 0 && rounded !== 0 ? -rounded : rounded;
}

export interface NumberStyle {
  decimals?: number;
  /** `always` prints + before a positive figure: bypass flow and changes carry their sign. */
  sign?: 'auto' | 'always';
}

/** A plain number: `1,720`, `−0.4`, `+571`; missing or not finite: `-`. A figure that rounds to nothing is `0`, unsigned. */
export function formatNumber(value: Maybe, { decimals = 0, sign = 'auto' }: NumberStyle = {}): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return MISSING;
  const rounded = roundHalfAway(value, decimals);
  const [whole = '0', fraction] = Math.abs(rounded).toFixed(decimals).split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+(?!\d))/g, ',');
  const digits = fraction === undefined ? grouped : `${grouped}.${fraction}`;
  if (rounded < 0) return MINUS + digits;
  return sign === 'always' && rounded > 0 ? `+${digits}` : digits;
}

/** A stored value as printed in the reader's system, without its unit. */
export function formatQuantity(
  value: Maybe,
  quantity: PrintedQuantity,
  units: UnitSystem = 'ip',
  sign: NumberStyle['sign'] = 'auto',
): string {
  return formatNumber(toPrinted(value, quantity, units), { decimals: DECIMALS[units][quantity], sign });
}

export const formatTemperature = (tempF: Maybe, units: UnitSystem = 'ip') =>
  formatQuantity(tempF, 'temperature', units);
export const formatDeltaT = (deltaF: Maybe, units: UnitSystem = 'ip') =>
  formatQuantity(deltaF, 'temperatureDifference', units);
/** A change in temperature: always signed. */
export const formatDeltaTChange = (deltaF: Maybe, units: UnitSystem = 'ip') =>
  formatQuantity(deltaF, 'temperatureDifference', units, 'always');
export const formatFlow = (flowGpm: Maybe, units: UnitSystem = 'ip') => formatQuantity(flowGpm, 'flow', units);
/** Bypass flow: always signed, forward positive. */
export const formatBypass = (flowGpm: Maybe, units: UnitSystem = 'ip') =>
  formatQuantity(flowGpm, 'flow', units, 'always');
export const formatLoad = (loadTons: Maybe, units: UnitSystem = 'ip') => formatQuantity(loadTons, 'load', units);

/** A figure and its unit, joined so that they never part at a line's end; a missing figure stands alone. */
export const withUnit = (figure: string, unit: string): string =>
  figure === MISSING ? figure : `${figure}${NO_BREAK_SPACE}${unit}`;

/** Minutes as h:mm, `9:45`; zero is `0:00`. */
export function formatHoursMinutes(minutes: Maybe): string {
  if (minutes === null || minutes === undefined || !Number.isFinite(minutes)) return MISSING;
  const whole = Math.round(Math.abs(minutes));
  return `${Math.floor(whole / 60)}:${String(whole % 60).padStart(2, '0')}`;
}

/** Money, without its currency: two decimals within an hour, whole for a week or more. */
export const formatMoney = (amount: Maybe, over: 'hour' | 'week'): string =>
  formatNumber(amount, { decimals: over === 'hour' ? 2 : 0 });

/** A share of 0 to 1 in percent, without the sign: `36`. */
export const formatPercent = (share: Maybe, decimals = 0): string =>
  formatNumber(share === null || share === undefined ? null : share * 100, { decimals });

/** A probability or confidence of 0 to 1 as two places without the zero, `.97`; 1 is `1.00`, never rounded up to it. */
export function formatProbability(probability: Maybe): string {
  if (probability === null || probability === undefined || !Number.isFinite(probability)) return MISSING;
  if (probability >= 1) return '1.00';
  return Math.min(0.99, roundHalfAway(Math.max(0, probability), 2))
    .toFixed(2)
    .slice(1);
}

/** `±0.2`, for intervals that are near enough symmetric; missing prints nothing at all. */
export function formatPlusMinus(halfWidth: Maybe, quantity: PrintedQuantity, units: UnitSystem = 'ip'): string {
  // A half width is a difference: a temperature's must not have 32 taken off it.
  const kind = quantity === 'temperature' ? 'temperatureDifference' : quantity;
  const text = formatQuantity(
    halfWidth === null || halfWidth === undefined ? halfWidth : Math.abs(halfWidth),
    kind,
    units,
  );
  return text === MISSING ? '' : `±${text}`;
}

/** `−1,059 to −872`, the interval in full; missing when either bound is. */
export function formatInterval(
  lo: Maybe,
  hi: Maybe,
  quantity: PrintedQuantity,
  units: UnitSystem = 'ip',
  sign: NumberStyle['sign'] = 'auto',
): string {
  const from = formatQuantity(lo, quantity, units, sign);
  const to = formatQuantity(hi, quantity, units, sign);
  return from === MISSING || to === MISSING ? MISSING : `${from} to ${to}`;
}

/** Size of a file: `1.2 MB`, decimal units as file managers print them. */
export function formatBytes(sizeBytes: number): string {
  if (sizeBytes >= 999_950_000) return withUnit(formatNumber(sizeBytes / 1e9, { decimals: 1 }), 'GB');
  if (sizeBytes >= 99_950) return withUnit(formatNumber(sizeBytes / 1e6, { decimals: 1 }), 'MB');
  return withUnit(formatNumber(Math.max(sizeBytes > 0 ? 1 : 0, sizeBytes / 1000)), 'kB');
}
