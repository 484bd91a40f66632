/**
 * Every unit conversion of the product stands here once, with its source.
 *
 * Inside, values are deg F, US gpm, tons of refrigeration, kW, psi and percent. NaN passes through.
 */

/** US gallon in m3, exact: 231 cubic inches (NIST SP 811, 2008, appendix B.8). */
export const GALLON_M3 = 0.003785411784;
/** Avoirdupois pound in kg, exact (NIST SP 811, 2008, appendix B.8). */
export const POUND_KG = 0.45359237;
/** International-table Btu in J, exact by definition 1055.05585262 (NIST SP 811, 2008, appendix B.8). */
export const BTU_J = 1055.05585262;
/** One ton of refrigeration in Btu/h: 288,000 Btu a day (NIST SP 811, 2008, appendix B.8). */
export const TON_BTU_PER_HOUR = 12_000;
/** One ton of refrigeration in kW: 12,000 Btu(IT)/h. */
export const TON_KW = (TON_BTU_PER_HOUR * BTU_J) / 3600 / 1000;
/** Mechanical horsepower in kW (NIST SP 811, 2008, appendix B.8: 550 ft lbf/s = 745.6999 W). */
export const HORSEPOWER_KW = 0.745699872;
/** One pound-force per square inch in kPa (NIST SP 811, 2008, appendix B.8). */
export const PSI_KPA = 6.894757293168;
/** One bar in kPa, exact (NIST SP 811, 2008, appendix B.8). */
export const BAR_KPA = 100;
/** Conventional foot of water (39.2 F) in kPa (NIST SP 811, 2008, appendix B.8). */
export const FOOT_WATER_KPA = 2.98898;

export const fahrenheitFromCelsius = (tempC: number): number => tempC * 1.8 + 32;
export const celsiusFromFahrenheit = (tempF: number): number => (tempF - 32) / 1.8;
/** A temperature difference, not a temperature: no 32 is added. */
export const celsiusDeltaFromFahrenheitDelta = (deltaF: number): number => deltaF / 1.8;

const LITRE_PER_SECOND_GPM = 60 / (GALLON_M3 * 1000);
export const gpmFromLitresPerSecond = (flowLs: number): number => flowLs * LITRE_PER_SECOND_GPM;
export const litresPerSecondFromGpm = (flowGpm: number): number => flowGpm / LITRE_PER_SECOND_GPM;

export const kilowattsFromTons = (loadTons: number): number => loadTons * TON_KW;
export const tonsFromKilowatts = (loadKw: number): number => loadKw / TON_KW;

/** The kinds of quantity a trend point can carry. */
export type Quantity = 'temperature' | 'flow' | 'power' | 'percent' | 'status' | 'pressure';

/** A unit a trend column may come in: its quantity, how people write it, and the way to the unit kept inside. */
export interface TrendUnit {
  id: TrendUnitId;
  quantity: Quantity;
  label: string;
  /** Lower-case spellings met in headings and unit rows. */
  spellings: readonly string[];
  toStored: (value: number) => number;
}

export const TREND_UNIT_IDS = [
  'degF',
  'degC',
  'K',
  'gpm',
  'L/s',
  'm3/h',
  'L/min',
  'kW',
  'W',
  'hp',
  'tons',
  'MBH',
  'Btu/h',
  '%',
  'fraction',
  'on/off',
  'psi',
  'kPa',
  'bar',
  'ftH2O',
] as const;
export type TrendUnitId = (typeof TREND_UNIT_IDS)[number];

const same = (value: number) => value;

export const TREND_UNITS: Readonly<Record<TrendUnitId, TrendUnit>> = {
  degF: {
    id: 'degF',
    quantity: 'temperature',
    label: '°F',
    spellings: ['f', 'degf', 'deg f', '°f', 'fahrenheit', 'deg_f', 'degreesfahrenheit', 'degrees-fahrenheit', '℉'],
    toStored: same,
  },
  degC: {
    id: 'degC',
    quantity: 'temperature',
    label: '°C',
    spellings: [
      'c',
      'degc',
      'deg c',
      '°c',
      'celsius',
      'deg_c',
      'degreescelsius',
      'degrees-celsius',
      '℃',
      'centigrade',
      'grad celsius',
      'grad c',
    ],
    toStored: fahrenheitFromCelsius,
  },
  K: {
    id: 'K',
    quantity: 'temperature',
    label: 'K',
    spellings: ['k', 'kelvin', 'degk', 'degrees-kelvin'],
    toStored: (value) => fahrenheitFromCelsius(value - 273.15),
  },
  gpm: {
    id: 'gpm',
    quantity: 'flow',
    label: 'gpm',
    spellings: [
      'gpm',
      'us gpm',
      'usgpm',
      'gal/min',
      'gallons per minute',
      'us-gallons-per-minute',
      'gal/mn',
      'usg/min',
    ],
    toStored: same,
  },
  'L/s': {
    id: 'L/s',
    quantity: 'flow',
    label: 'L/s',
    spellings: ['l/s', 'lps', 'ltr/s', 'liters-per-second', 'litres per second', 'liter/s', 'litre/s'],
    toStored: gpmFromLitresPerSecond,
  },
  'm3/h': {
    id: 'm3/h',
    quantity: 'flow',
    label: 'm³/h',
    spellings: [
      'm3/h',
      'm³/h',
      'cmh',
      'm3h',
      'm3/hr',
      'm3/std',
      'cbm/h',
      'm^3/h',
      'cubic-meters-per-hour',
      'cubic metres per hour',
    ],
    toStored: (value) => gpmFromLitresPerSecond(value / 3.6),
  },
  'L/min': {
    id: 'L/min',
    quantity: 'flow',
    label: 'L/min',
    spellings: ['l/min', 'lpm', 'l/mn', 'liters-per-minute', 'litres per minute', 'liters/min', 'litres/min'],
    toStored: (value) => gpmFromLitresPerSecond(value / 60),
  },
  kW: {
    id: 'kW',
    quantity: 'power',
    label: 'kW',
    spellings: ['kw', 'kwe', 'kwth', 'kilowatt', 'kilowatts'],
    toStored: same,
  },
  W: { id: 'W', quantity: 'power', label: 'W', spellings: ['w', 'watt', 'watts'], toStored: (value) => value / 1000 },
  hp: {
    id: 'hp',
    quantity: 'power',
    label: 'hp',
    spellings: ['hp', 'bhp', 'horsepower'],
    toStored: (value) => value * HORSEPOWER_KW,
  },
  tons: {
    id: 'tons',
    quantity: 'power',
    label: 'tons',
    spellings: ['ton', 'tons', 'tr', 'rt', 'tonr', 'tons-refrigeration', 'tons of refrigeration'],
    toStored: kilowattsFromTons,
  },
  MBH: {
    id: 'MBH',
    quantity: 'power',
    label: 'MBH',
    spellings: ['mbh', 'mbtu/h', 'mbtuh', 'kbtu/h', 'kbtuh', 'kilo-btus-per-hour'],
    toStored: (value) => kilowattsFromTons((value * 1000) / TON_BTU_PER_HOUR),
  },
  'Btu/h': {
    id: 'Btu/h',
    quantity: 'power',
    label: 'Btu/h',
    spellings: ['btu/h', 'btuh', 'btu/hr', 'btus-per-hour'],
    toStored: (value) => kilowattsFromTons(value / TON_BTU_PER_HOUR),
  },
  '%': {
    id: '%',
    quantity: 'percent',
    label: '%',
    spellings: ['%', 'pct', 'percent', 'prozent', '% load', '%rla', '%fla'],
    toStored: same,
  },
  fraction: {
    id: 'fraction',
    quantity: 'percent',
    label: '0 to 1',
    spellings: ['fraction', '0-1'],
    toStored: (value) => value * 100,
  },
  'on/off': {
    id: 'on/off',
    quantity: 'status',
    label: 'on/off',
    spellings: ['on/off', 'onoff', 'status', 'bool', 'no-units'],
    toStored: same,
  },
  psi: {
    id: 'psi',
    quantity: 'pressure',
    label: 'psi',
    spellings: ['psi', 'psid', 'psig', 'lb/in2', 'lbf/in2', 'pounds-force-per-square-inch'],
    toStored: same,
  },
  kPa: {
    id: 'kPa',
    quantity: 'pressure',
    label: 'kPa',
    spellings: ['kpa', 'kpad', 'kpag', 'kilopascal', 'kilopascals'],
    toStored: (value) => value / PSI_KPA,
  },
  bar: {
    id: 'bar',
    quantity: 'pressure',
    label: 'bar',
    spellings: ['bar', 'bars', 'barg'],
    toStored: (value) => (value * BAR_KPA) / PSI_KPA,
  },
  ftH2O: {
    id: 'ftH2O',
    quantity: 'pressure',
    label: 'ft of water',
    spellings: ['ft', 'fth2o', 'ftwc', 'ft wc', 'ftwg', 'ft h2o', 'ftwater', 'ft of water', 'feet', 'feet-of-water'],
    toStored: (value) => (value * FOOT_WATER_KPA) / PSI_KPA,
  },
};

/** The unit in which a quantity is kept in the database, for labels and API names. */
export const STORED_UNIT: Readonly<Record<Quantity, TrendUnitId>> = {
  temperature: 'degF',
  flow: 'gpm',
  power: 'kW',
  percent: '%',
  status: 'on/off',
  pressure: 'psi',
};
