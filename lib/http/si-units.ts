import {
  celsiusDeltaFromFahrenheitDelta,
  celsiusFromFahrenheit,
  FOOT_WATER_KPA,
  kilowattsFromTons,
  litresPerSecondFromGpm,
  TON_KW,
} from '../units';

interface SiForm {
  name: string;
  convert: (value: number) => number;
}

/** Names whose F is a difference of temperatures or an uncertainty: no 32 is taken off. In camelCase. */
const DIFFERENCES = new Set([
  'sigmaF',
  'priorSigmaF',
  'noiseF',
  'incrementF',
  'offsetLoF',
  'offsetHiF',
  'tempPlusMinusF',
  'loadF',
  'blendF',
  'dilutionF',
  'productionF',
]);
/** Words before a closing F that make it a difference wherever they stand: deltaTF, offsetF, plusMinusF, warmerByF. */
const DIFFERENCE_WORDS = /(deltaT|offset|Offset|plusMinus|PlusMinus|By|drift|Drift|error|Error|change|Change)F$/;

const SUFFIXES: readonly { camel: RegExp; si: string; convert: (value: number) => number }[] = [
  { camel: /Gpm$/, si: 'Ls', convert: litresPerSecondFromGpm },
  // Flow for a load: gpm per ton becomes L/s per kW of cooling.
  { camel: /GpmPerTon$/, si: 'LsPerKw', convert: (value) => litresPerSecondFromGpm(value) / TON_KW },
  { camel: /TonHours$/, si: 'CoolingKwh', convert: kilowattsFromTons },
  { camel: /PerTon$/, si: 'PerKw', convert: (value) => value / TON_KW },
  { camel: /Tons$/, si: 'Kw', convert: kilowattsFromTons },
  // Pump head: a foot of water as the height of water of the same pressure.
  { camel: /Ft$/, si: 'M', convert: (value) => (value * FOOT_WATER_KPA) / METRE_WATER_KPA },
];
/** One conventional metre of water in kPa (NIST SP 811, 2008, appendix B.8). */
const METRE_WATER_KPA = 9.80665;

const isDifference = (camel: string): boolean =>
  DIFFERENCES.has(camel) || /^deltaTF$/.test(camel) || DIFFERENCE_WORDS.test(camel) || /DeltaTF$/.test(camel);

/** The SI name and conversion of a camelCase name that carries a trade unit; null for a name that carries none. */
export function siForm(name: string): SiForm | null {
  if (name === 'tons') return { name: 'coolingKw', convert: kilowattsFromTons };
  if (/[a-zT]F$/.test(name)) {
    return {
      name: `${name.slice(0, -1)}C`,
      convert: isDifference(name) ? celsiusDeltaFromFahrenheitDelta : celsiusFromFahrenheit,
    };
  }
  for (const { camel, si, convert } of SUFFIXES) {
    if (camel.test(name)) return { name: name.replace(camel, si), convert };
  }
  return null;
}

const camelOf = (snake: string): string =>
  snake.replace(/_t_(f|c)$/, 'T_$1').replace(/_([a-z0-9])/g, (_, letter: string) => letter.toUpperCase());
const snakeOf = (camel: string): string =>
  camel
    .replace(/T([FC])$/, '_t_$1')
    .replace(/[A-Z]/g, (letter) => `_${letter}`)
    .toLowerCase()
    .replaceAll('__', '_');

/** The same for a snake_case column of a CSV: `blended_supply_lo_f` becomes `blended_supply_lo_c`. */
export function siColumn(column: string): SiForm | null {
  const form = siForm(camelOf(column));
  return form && { name: snakeOf(form.name), convert: form.convert };
}

const converted = (value: unknown, convert: (value: number) => number): unknown => {
  if (typeof value === 'number') return convert(value);
  return Array.isArray(value) ? value.map((each) => converted(each, convert)) : value;
};

/** A whole JSON answer in SI: every name that carries a trade unit is renamed and its number (or array of numbers) converted. */
export function toSi(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(toSi);
  if (value === null || typeof value !== 'object' || value instanceof Date) return value;
  return Object.fromEntries(
    Object.entries(value).map(([name, inner]) => {
      const form = siForm(name);
      return form ? [form.name, converted(inner, form.convert)] : [name, toSi(inner)];
    }),
  );
}

/** The answer in the units asked for. */
export function inUnits(answer: object, units: 'ip' | 'si'): object {
  return units === 'si' ? (toSi(answer) as object) : answer;
}
