import type { ProblemSeverity, TrendProblem } from './types';

/** More kinds of trouble than this are not told apart any more. */
export const MOST_PROBLEM_KINDS = 200;
/** Different words kept apart in one column. */
const MOST_WORDS_OF_A_COLUMN = 8;
/** Longest piece of a cell that is quoted in a sentence. */
const LONGEST_QUOTE = 40;

interface Sighting {
  code: string;
  severity: ProblemSeverity;
  row: number;
  column?: string;
  /** What tells two problems of one code and column apart, such as the word that was met. */
  detail?: string;
  /** Built only when the kind is new or an earlier row of it is met. */
  message: () => string;
  count?: number;
}

export type CountedProblem = TrendProblem & { row: number };

/** Counts troubles by kind: code, column and detail. Keeps the sentence of the first row, in row order. */
export class ProblemLog {
  private readonly kinds = new Map<string, CountedProblem>();
  private readonly words = new Map<string, number>();

  /** The kind that counted it: whoever meets the same trouble in a later row may raise its count directly. */
  add(seen: Sighting): CountedProblem {
    const count = seen.count ?? 1;
    const family = `${seen.code}\n${seen.column ?? ''}`;
    const key = `${family}\n${seen.detail ?? ''}`;
    const known = this.kinds.get(key) ?? this.overflow(seen, family);
    if (known) {
      known.count += count;
      if (seen.row < known.row && known.code === seen.code && this.kinds.get(key) === known) {
        known.row = seen.row;
        known.message = detached(seen.message());
      }
      return known;
    }
    if (seen.detail !== undefined) this.words.set(family, (this.words.get(family) ?? 0) + 1);
    const kind: CountedProblem = {
      code: seen.code,
      severity: seen.severity,
      message: detached(seen.message()),
      row: seen.row,
      column: seen.column,
      count,
    };
    this.kinds.set(detached(key), kind);
    return kind;
  }

  list(): TrendProblem[] {
    return [...this.kinds.values()].map((problem) => ({ ...problem })).sort((a, b) => a.row - b.row);
  }

  /** The kind that takes what is too various to be listed one by one; undefined while there is room. */
  private overflow(seen: Sighting, family: string): CountedProblem | undefined {
    const many = (this.words.get(family) ?? 0) >= MOST_WORDS_OF_A_COLUMN && seen.detail !== undefined;
    if (!many && this.kinds.size < MOST_PROBLEM_KINDS - 1) return undefined;
    const full = this.kinds.size >= MOST_PROBLEM_KINDS - 1;
    const key = full ? 'more' : `${family}\nother`;
    const known = this.kinds.get(key);
    if (known) return known;
    const made = full
      ? { code: 'more', message: 'Further kinds of trouble are only counted from here on.' }
      : { code: seen.code, column: seen.column, message: 'Other words that are not readings. Read as missing.' };
    const problem = { severity: seen.severity, row: seen.row, count: 0, ...made };
    this.kinds.set(key, problem);
    return problem;
  }
}

/** A copy that does not keep alive the block of text it was cut from. */
export const detached = (text: string): string => Buffer.from(text, 'utf8').toString('utf8');

/** A cell in quotation marks, shortened. */
export function quoted(cell: string): string {
  const text = cell.trim().replace(/\s+/g, ' ');
  return `"${text.length > LONGEST_QUOTE ? `${text.slice(0, LONGEST_QUOTE - 1)}…` : text}"`;
}

export const plural = (count: number, one: string, many = `${one}s`): string =>
  `${count.toLocaleString('en-US')} ${count === 1 ? one : many}`;

/** `3 hours`, `1 hour 20 minutes`, `2 days`: the two largest parts. */
export function durationText(ms: number): string {
  const seconds = Math.round(ms / 1000);
  const parts = [
    [Math.floor(seconds / 86_400), 'day'],
    [Math.floor(seconds / 3600) % 24, 'hour'],
    [Math.floor(seconds / 60) % 60, 'minute'],
    [seconds % 60, 'second'],
  ] as const;
  const shown = parts.filter(([value]) => value > 0).slice(0, 2);
  return shown.length === 0 ? '0 seconds' : shown.map(([value, name]) => plural(value, name)).join(' ');
}
