import { isMissingWord, measureOfText, stateOfWord } from './cell-text';

/** What a cell looks like on its own, before anything is known of its column. */
export type CellKind = 'blank' | 'number' | 'time' | 'word' | 'text';

const NUMBER =
  /^[-+]?(?:\d{1,3}(?:[., '\u00a0\u202f\u2019]\d{3})+(?:[.,]\d+)?|\d+(?:[.,]\d*)?|[.,]\d+)(?:[eE][-+]?\d+)?(?:\s?[°º]?\s?[a-zA-Z%³²/]{1,8}|\s*\{[^{}]*\})?$/;
const DATE =
  /^(?:[a-z]{2,9}\.?,?\s+)?(?:\d{1,4}\s?[-/.]\s?(?:\d{1,2}|[a-zéûä]{3,9}\.?)(?:\s?[-/.]\s?\d{1,4})?(?!\d|[.,]\d)|\d{1,2}\.?\s+[a-zéûä]{3,9}\.?,?\s+\d{2,4}|[a-z]{3,9}\.?\s+\d{1,2},?\s+\d{2,4}|\d{8}T\d{4})(?=$|[\s,T:])/i;
const CLOCK = /^\d{1,2}:\d{2}/;
/** A date and a clock in one cell, or a date with a year: no number looks like that. */
const WHOLE_DATE = /\d\D+(?:\d{1,2}|[a-zéûä]{3,9})\D+\d|:\d{2}/i;

export function cellKind(cell: string): CellKind {
  const text = cell.trim();
  if (text === '') return 'blank';
  if (CLOCK.test(text) || (DATE.test(text) && WHOLE_DATE.test(text))) return 'time';
  if (NUMBER.test(text)) return 'number';
  if (isMissingWord(text) || !Number.isNaN(stateOfWord(text))) return 'word';
  return /\d/.test(text) && (measureOfText(text, '.') ?? measureOfText(text, ',')) ? 'number' : 'text';
}

/** Share of a row's cells that are data rather than words; 0 for a blank row. */
export function dataShare(cells: readonly string[]): number {
  let data = 0;
  let filled = 0;
  for (const cell of cells) {
    const kind = cellKind(cell);
    if (kind === 'blank') continue;
    filled++;
    if (kind !== 'text') data++;
  }
  return filled === 0 ? 0 : data / filled;
}

/**
 * The decimal sign of a set of cells. A comma with other than three digits behind it is a decimal comma, and so on;
 * where every number could be read both ways, it is the point.
 */
export function decimalOf(cells: Iterable<string>): '.' | ',' {
  let comma = 0;
  let point = 0;
  for (const cell of cells) {
    const text = cell.trim();
    const found =
      /^[-+(]?[\d.,' \u00a0\u2009\u202f\u2019]*?([.,])(\d+)(?:[eE][-+]?\d+)?(?:$|\s*[^\d\s.,].{0,24}$)/.exec(text);
    if (!found || (!NUMBER.test(text) && cellKind(text) !== 'number')) continue;
    const isComma = found[1] === ',';
    const groupedByOther = text.includes(isComma ? '.' : ',');
    if (found[2]!.length === 3 && !groupedByOther && !/^[-+]?0/.test(text)) continue;
    if (isComma) comma++;
    else point++;
  }
  return comma > point ? ',' : '.';
}
