import { TREND_UNIT_IDS, TREND_UNITS, type TrendUnitId } from '../units';

/** A unit's spelling without blanks, dots, case and the many ways to write an hour or a degree. */
function plainUnit(text: string): string {
  return text
    .replaceAll('º', '°')
    .normalize('NFKC')
    .toLowerCase()
    .replace(/[\s.^_-]+/g, '')
    .replace(/degrees?/g, 'deg')
    .replace(/\/(hours?|hr)$/, '/h')
    .replace(/\/sec(onds?)?$/, '/s')
    .replace(/\/minutes?$/, '/min')
    .replace(/^(us)?gal(lon)?s?(\/|per)min(ute)?$/, 'gpm');
}

const BY_SPELLING = new Map<string, TrendUnitId>(
  TREND_UNIT_IDS.flatMap((id) =>
    [id, ...TREND_UNITS[id].spellings].map((spelling) => [plainUnit(spelling), id] as const),
  ),
);

/** Spellings as they were met: a column repeats its own in every row. */
const MET = new Map<string, TrendUnitId>();
const MOST_MET = 256;

/** The unit a text names, or null. */
export function unitOfText(text: string): TrendUnitId | null {
  const known = MET.get(text);
  if (known !== undefined) return known;
  const unit = BY_SPELLING.get(plainUnit(text)) ?? null;
  // Copied, so that it does not keep alive the block of text it was cut from.
  if (unit !== null && MET.size < MOST_MET) MET.set(Buffer.from(text, 'utf8').toString('utf8'), unit);
  return unit;
}

/** Spellings that also mean something else in a heading (a letter, heat pump, feet of what): only believed in brackets or a unit row. */
const NEEDS_BRACKETS = new Set([
  'f',
  'c',
  'k',
  'w',
  'hp',
  'bar',
  'bars',
  'ft',
  'feet',
  'tr',
  'rt',
  'status',
  'bool',
  'fraction',
  '01',
]);

/** The unit in a cell of a unit row, with or without brackets. */
export const unitOfCell = (cell: string): TrendUnitId | null => unitOfText(cell.trim().replace(/^[([]|[)\]]$/g, ''));

/** What a heading says of its unit. */
export interface HeadingUnit {
  unit: TrendUnitId | null;
  /** As it stands in the heading; empty when the heading names none. */
  text: string;
  /** A last letter that may mean degrees, to be believed when the rest of the name says temperature. */
  letter: 'degF' | 'degC' | null;
  /** The heading without its unit. */
  name: string;
}

const BRACKETED = /[([{]\s*([^()[\]{}]*?)\s*[)\]}]\s*$/;
const LAST_WORDS = /^(.*?[\s_.,;:-])((?:us[\s_]?|deg[\s_.]?)?[°º%a-z0-9³/²]+)\s*$/i;
/** Longest bracketed text that is taken for a unit although it is none that is known. */
const LONGEST_UNKNOWN = 8;

/** The unit in a column's heading: in brackets, behind a comma, or as the last word. */
export function unitOfHeading(heading: string): HeadingUnit {
  const none: HeadingUnit = { unit: null, text: '', letter: null, name: heading };
  const bracketed = BRACKETED.exec(heading);
  if (bracketed) {
    const text = bracketed[1]!;
    const unit = unitOfText(text);
    const name = heading.slice(0, bracketed.index).trim();
    if (unit) return { unit, text, letter: null, name };
    const unitLike =
      text.length <= LONGEST_UNKNOWN &&
      /^[a-z°º%³²/0-9\s-]+$/i.test(text) &&
      /[a-z%°]/i.test(text) &&
      !/\d$/.test(text);
    return unitLike ? { unit: null, text, letter: null, name } : none;
  }
  const last = LAST_WORDS.exec(heading);
  if (!last) return none;
  const text = last[2]!;
  const name = last[1]!.replace(/[\s_.,;:-]+$/, '');
  const plain = plainUnit(text);
  if (plain === 'f' || plain === 'c') return { ...none, letter: plain === 'f' ? 'degF' : 'degC' };
  const unit = NEEDS_BRACKETS.has(plain) ? null : unitOfText(text);
  return unit ? { unit, text, letter: null, name } : none;
}
