import { cellKind } from './cells';
import { isMissingWord, stateOfWord } from './cell-text';
import type { NumberedRow } from './dialect';
import { statusMeaning } from './status-words';
import type { TableShape } from './types';
import { unitOfCell } from './unit-text';

/** Headings over the column that names the point, the value, its status and its unit in a long table. */
const POINT_WORDS = /\b(point|tag|object|sensor|variable|parameter|channel|series|signal|name|item|trend|datapoint)/i;
const VALUE_WORDS = /\b(value|reading|wert|valeur|valor|val|data|measurement|present.?value)\b/i;
const STATUS_WORDS = /\b(status|quality|state|flags?|reliab\w*|qualit\w*|condition)\b/i;
const UNIT_WORDS = /\b(units?|uom|einheit|unité|unidad|eng\.? ?units?)\b/i;
/** Columns of a long table that say nothing of the reading. */
const ASIDE_WORDS = /\b(id|key|no|nr|seq\w*|index|row|record|user|priority|type|description|desc)\b/i;

const NUMBER_SHARE = 0.5;
const WORD_SHARE = 0.8;
/** A column names points when each of its texts comes back at least this often on average. */
const LEAST_REPEATS = 2;

interface Column {
  index: number;
  name: string;
  filled: number;
  numbers: number;
  words: number;
  /** Texts that are neither numbers, times, missing words nor states. */
  names: Map<string, number>;
  units: number;
}

function describe(name: string, index: number, data: readonly NumberedRow[]): Column {
  const column: Column = { index, name, filled: 0, numbers: 0, words: 0, names: new Map(), units: 0 };
  for (const { cells } of data) {
    const text = (cells[index] ?? '').trim();
    if (text === '') continue;
    column.filled++;
    const kind = cellKind(text);
    if (kind === 'number') column.numbers++;
    else if (isMissingWord(text) || !Number.isNaN(stateOfWord(text))) column.words++;
    else column.names.set(text, (column.names.get(text) ?? 0) + 1);
    if (kind !== 'number' && unitOfCell(text) !== null) column.units++;
  }
  return column;
}

const spaced = (name: string): string => name.replace(/([a-z])([A-Z])/g, '$1 $2').replace(/[_-]+/g, ' ');

/**
 * Whether a table has a column a point or a row a reading. A long table has one column of names that come again and again,
 * and one of values; where names are numbers, the headings have to say so. `time` holds the indexes of the time's cells.
 */
export function shapeOf(names: readonly string[], data: readonly NumberedRow[], time: readonly number[]): TableShape {
  const columns = names.flatMap((name, index) => (time.includes(index) ? [] : [describe(spaced(name), index, data)]));
  const used = columns.filter(({ filled }) => filled > 0);
  const units = used.find((c) => c.units >= WORD_SHARE * c.filled && c.numbers === 0);
  const point = pointColumn(used.filter((column) => column !== units));
  if (!point) return { kind: 'wide', status: statusBesideOne(names, used) };
  const value = valueColumn(used.filter((column) => column !== units && column !== point));
  if (!value) return { kind: 'wide' };
  const rest = used.filter((column) => ![units, point, value].includes(column));
  const readings = rest.filter((c) => c.numbers > NUMBER_SHARE * c.filled && !STATUS_WORDS.test(c.name));
  // Further columns of readings: a wide table with a column of words in it.
  if (readings.some((column) => !ASIDE_WORDS.test(column.name))) return { kind: 'wide' };
  const status =
    rest.find(({ name }) => STATUS_WORDS.test(name)) ?? rest.find((c) => c.numbers === 0 && !ASIDE_WORDS.test(c.name));
  return {
    kind: 'long',
    point: names[point.index]!,
    value: names[value.index]!,
    status: status ? names[status.index]! : null,
    unit: units ? names[units.index]! : (nameOf(names, rest, UNIT_WORDS) ?? null),
  };
}

const nameOf = (names: readonly string[], columns: readonly Column[], words: RegExp): string | undefined => {
  const found = columns.find(({ name }) => words.test(name));
  return found && names[found.index];
};

/** The status of each reading, where a table holds a single point: words that say how good it is, not whether a unit runs. */
function statusBesideOne(names: readonly string[], used: readonly Column[]): string | null {
  const readings = used.filter(({ numbers, words }) => numbers + words > 0);
  const status = used.find(
    ({ name, numbers, words, names: texts }) =>
      STATUS_WORDS.test(name) &&
      numbers === 0 &&
      (words === 0 || texts.size > 0) &&
      [...texts.keys()].some((text) => statusMeaning(text) !== 'unknown'),
  );
  return status && readings.filter((column) => column !== status).length === 1 ? names[status.index]! : null;
}

function pointColumn(columns: readonly Column[]): Column | null {
  const textual = columns.filter((column) => {
    const texts = [...column.names.values()].reduce((sum, count) => sum + count, 0);
    return texts >= WORD_SHARE * column.filled && !STATUS_WORDS.test(column.name) && !UNIT_WORDS.test(column.name);
  });
  const repeats = (column: Column) => column.names.size * LEAST_REPEATS <= column.filled;
  const headed = textual.filter(({ name }) => POINT_WORDS.test(name));
  const named = headed.find(repeats) ?? headed.find(({ filled }) => filled < LEAST_REPEATS * 4);
  if (named) return named;
  const unnamed = textual.find((column) => column.names.size >= 2 && repeats(column));
  if (unnamed && columns.some(({ name }) => VALUE_WORDS.test(name))) return unnamed;
  // Points that go by numbers.
  const coded = columns.find((c) => POINT_WORDS.test(c.name) && c.numbers === c.filled && c.filled > 0);
  return coded && columns.some((column) => column !== coded && VALUE_WORDS.test(column.name)) ? coded : null;
}

function valueColumn(columns: readonly Column[]): Column | null {
  const readable = columns.filter((c) => c.numbers + c.words >= NUMBER_SHARE * c.filled && !STATUS_WORDS.test(c.name));
  const named = readable.find(({ name }) => VALUE_WORDS.test(name));
  if (named) return named;
  const numeric = readable.filter((c) => c.numbers > 0 && !ASIDE_WORDS.test(c.name));
  return numeric.length === 1 ? numeric[0]! : null;
}
