import { TREND_UNITS, type Quantity, type TrendUnitId } from '../units';
import { plainWords } from './event-words';
import { unitOfText } from './unit-text';

/** What programs write where there is no reading. Lower case. */
const MISSING_WORDS = new Set([
  'bad',
  'nan',
  '-nan',
  'na',
  'n/a',
  'nil',
  'none',
  'null',
  'no data',
  'nodata',
  'no value',
  'missing',
  '-',
  '--',
  '---',
  '----',
  '*',
  '**',
  '***',
  '****',
  '*****',
  '?',
  '#n/a',
  '#na',
  '#value!',
  '#ref!',
  '#div/0!',
  '#num!',
  '#name?',
  'inf',
  '-inf',
  'infinity',
  '-infinity',
  'fault',
  'down',
  'offline',
  'comm fail',
  'unknown',
  'undefined',
]);

/** The same in the words of other languages and of gateways; without case, accents and brackets (plainWords). */
const MISSING_PHRASES = new Set(
  `n.a.|n.v.|k.a.|not available|unavailable|out of service|no communication|comm failure|comm lost|comms fail|stale|timeout
  |error|err|#error|#err|invalid|failed|overflow|underflow|over range|under range|out of range|open circuit|short circuit
  |sensor fault|sensor failure|device offline|...|.|#|##|###|####|#####|######|<null>|\\n|–|—|kein wert|keine daten
  |ungultig|fehler|storung|gestort|fuhlerbruch|fehlt|schlecht|pas de donnees|pas de valeur|invalide|defaut|erreur|mauvais
  |absent|hors ligne|hors service|sin datos|sin valor|invalido|fallo|averia|malo|ausente|fuera de linea|fuera de servicio`
    .split('|')
    .map((phrase) => phrase.trim()),
);

/** States in English, German, French and Spanish, without case and accents. */
const ON_WORDS = new Set(
  `on true running run yes y active enabled enable started start open opened operating energized energised
  ein an lauft laufend betrieb wahr ja aktiv gestartet eingeschaltet offen auf
  marche vrai oui actif active ouvert demarre allume
  encendido marcha verdadero si activo activado abierto arrancado funcionando`.split(/\s+/),
);
const ON_PHRASES = new Set(['in operation', 'in betrieb', 'en marche', 'en service', 'en marcha', 'en servicio']);
const OFF_WORDS = new Set(
  `off false stopped stop no n inactive disabled disable closed close idle standby deenergized
  aus steht stillstand falsch nein inaktiv gestoppt ausgeschaltet geschlossen zu
  arret arrete faux non inactif inactive ferme eteint
  apagado paro parado falso inactivo desactivado cerrado detenido`.split(/\s+/),
);
const OFF_PHRASES = new Set([
  'not running',
  'not active',
  'de energized',
  'de energised',
  'ausser betrieb',
  'außer betrieb',
  'nicht in betrieb',
  'a l arret',
  'hors marche',
  'en paro',
]);

/** Numbers that loggers write in place of a reading, all below -900. Common practice, no source. */
const SENTINELS = new Set([-999, -999.9, -9999, -9999.9, -99999, -32768, -3276.8]);

/** Beyond these no sensor of the trade reads; in the stored unit. Common practice, no source. */
const PHYSICAL_LIMITS: Readonly<Record<Quantity, readonly [low: number, high: number]>> = {
  temperature: [-90, 300],
  flow: [-500_000, 500_000],
  power: [-1_000_000, 1_000_000],
  percent: [-250, 250],
  status: [0, 1],
  pressure: [-1000, 5000],
};

/** What a sensor can read, in a file's unit. Every conversion is a straight line, so the limits can be carried back. */
export function readableRange(unit: TrendUnitId): readonly [low: number, high: number] {
  const { quantity, toStored } = TREND_UNITS[unit];
  const atZero = toStored(0);
  const slope = toStored(1) - atZero;
  const [low, high] = PHYSICAL_LIMITS[quantity];
  return [(low - atZero) / slope, (high - atZero) / slope];
}

export function isMissingWord(trimmed: string): boolean {
  const word = trimmed.toLowerCase();
  return MISSING_WORDS.has(word) || MISSING_PHRASES.has(word) || MISSING_PHRASES.has(plainWords(trimmed));
}

/** A state behind or before its number: "On (1)", "1 - On". */
const NUMBER_BEHIND = /^(.*\D)\s*[([{=:]\s*\d\s*[)\]}]?$/;
const NUMBER_BEFORE = /^\d\s*[([{=:-]\s*(.+)$/;
/** No state is longer. */
const LONGEST_STATE = 40;

/** 1 for on, 0 for off, NaN for another word. A state may stand beside its number: "On (1)". */
export function stateOfWord(trimmed: string): number {
  if (trimmed.length > LONGEST_STATE) return Number.NaN;
  const bare = NUMBER_BEHIND.exec(trimmed)?.[1] ?? NUMBER_BEFORE.exec(trimmed)?.[1] ?? trimmed;
  const words = plainWords(bare);
  if (ON_WORDS.has(words) || ON_PHRASES.has(words)) return 1;
  return OFF_WORDS.has(words) || OFF_PHRASES.has(words) ? 0 : Number.NaN;
}
export const isSentinel = (value: number): boolean => SENTINELS.has(value);

/** Digits in groups of three, parted by one and the same mark, then perhaps a decimal mark and more digits. */
const GROUPED = /^([-+]?\d{1,3})(?:([,.' ʼ\u00a0\u2009\u202f\u2018\u2019])\d{3})(?:\2\d{3})*(?:([.,])\d*)?$/;
/** A number and what stands behind it. */
const WITH_UNIT =
  /^([-+]?[\d.,](?:[\d.,' ʼ\u00a0\u2009\u202f\u2018\u2019]*[\d.,])?(?:[eE][-+]?\d+)?)\s*([°º℃℉%a-zA-Z].{0,24})$/;
/** What unary plus reads but people do not write: hexadecimal and the like. */
const PLAIN = /^[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?$/;
/** Quotation marks that are left in a cell, a spreadsheet's mark for text, or its formula for text. */
const WRAPPED = /^(?:=?"\s*([^"]*?)\s*"|'\s*([^']*?)\s*'?)$/;
/** Minus as typesetters, bookkeepers and old reports write it. */
const BRACKETED = /^\(\s*([\d.,].*?)\s*\)(\s*[°º℃℉%a-zA-Z].*)?$/;
const TRAILING_MINUS = /^([\d.,]+)\s?-$/;
const OTHER_MINUS = /^[\u2212\u2013\u2010\u2011]\s?(?=[\d.,])/;
/** No number is longer. */
const LONGEST_NUMBER = 64;

/** A number, and the unit it names itself. */
export interface Measure {
  value: number;
  unit: TrendUnitId | null;
}

/**
 * A number as people write it: with grouped thousands, the file's decimal sign, a minus of any kind, and perhaps a unit
 * behind. Null when the text is no number. A number with two different marks can only be read one way, whatever the
 * file's decimal sign; one with a single mark follows the file.
 */
export function measureOfText(trimmed: string, decimal: '.' | ','): Measure | null {
  if (trimmed.length > LONGEST_NUMBER) return null;
  const text = isDigit(trimmed.charCodeAt(0)) && !trimmed.endsWith('-') ? trimmed : tidied(trimmed);
  const value = bareNumber(text, decimal);
  if (!Number.isNaN(value)) return { value, unit: null };
  const united = WITH_UNIT.exec(text);
  if (!united) return null;
  const unit = unitOfText(united[2]!);
  const before = unit ? bareNumber(united[1]!, decimal) : Number.NaN;
  return Number.isNaN(before) ? null : { value: before, unit };
}

const isDigit = (code: number): boolean => code >= 48 && code <= 57;

/** The same number without quotation marks and with a common minus in front. */
function tidied(trimmed: string): string {
  const wrapped = WRAPPED.exec(trimmed);
  const text = wrapped ? (wrapped[1] ?? wrapped[2] ?? '') : trimmed;
  const bracketed = BRACKETED.exec(text);
  const signed = bracketed ? `-${bracketed[1]}${bracketed[2] ?? ''}` : text;
  return signed.replace(OTHER_MINUS, '-').replace(TRAILING_MINUS, '-$1');
}

/** The number of a text in the unit it is written in; NaN when it is none. */
export const numberOfText = (trimmed: string, decimal: '.' | ','): number =>
  measureOfText(trimmed, decimal)?.value ?? Number.NaN;

function bareNumber(trimmed: string, decimal: '.' | ','): number {
  const text = decimal === ',' ? trimmed.replace(',', '.') : trimmed;
  if (PLAIN.test(text) && !(decimal === ',' && groupsWithDots(trimmed))) return +text;
  const grouped = GROUPED.exec(trimmed);
  if (!grouped) return Number.NaN;
  const [, , mark, fraction] = grouped;
  if (mark === fraction) return Number.NaN;
  return +trimmed.replaceAll(mark!, '').replace(',', '.');
}

/** With a decimal comma `1.234` is one thousand and so on. */
const groupsWithDots = (text: string): boolean => /^[-+]?\d{1,3}(\.\d{3})+$/.test(text);

/** A value of one unit in another of the same quantity; NaN when the quantities differ. */
export function convertedBetween(value: number, from: TrendUnitId, to: TrendUnitId): number {
  if (from === to) return value;
  const { quantity, toStored } = TREND_UNITS[to];
  if (TREND_UNITS[from].quantity !== quantity) return Number.NaN;
  const atZero = toStored(0);
  return (TREND_UNITS[from].toStored(value) - atZero) / (toStored(1) - atZero);
}
