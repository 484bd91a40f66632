/** What a cell's number stands for: `date` shows no time of day, `time` no date, `elapsed` counts hours beyond a day. */
export type NumberKind = 'number' | 'percent' | 'datetime' | 'date' | 'time' | 'elapsed';
export type TimeKind = Exclude<NumberKind, 'number' | 'percent'>;

const range = (from: number, to: number): number[] => Array.from({ length: to - from + 1 }, (_, i) => from + i);
/**
 * The formats every workbook has without declaring them.
 *
 * Source  ECMA-376 part 1, 18.8.30, including the East Asian formats.
 */
const BUILT_IN: ReadonlyMap<number, NumberKind> = new Map<number, NumberKind>([
  [9, 'percent'],
  [10, 'percent'],
  ...[...range(14, 17), ...range(27, 31), 36, ...range(50, 54), 57, 58].map((id) => [id, 'date'] as const),
  [22, 'datetime'],
  ...[...range(18, 21), ...range(32, 35), 45, 47, 55, 56].map((id) => [id, 'time'] as const),
  [46, 'elapsed'],
]);

/** What numbers in a format are, by its number and, unless it is built in, its code. */
export function numberKind(id: number, code: string | undefined): NumberKind {
  return code === undefined ? (BUILT_IN.get(id) ?? 'number') : kindOfCode(code);
}

function kindOfCode(code: string): NumberKind {
  const letters = code
    .replace(/"[^"]*"?/g, '')
    .replace(/\\.|_.|\*./gs, '')
    .split(';', 1)[0]
    ?.toLowerCase();
  if (letters === undefined || letters.includes('general')) return 'number';
  if (/\[(h+|m+|s+)\]/.test(letters)) return 'elapsed';
  // Colours, conditions and languages.
  const plain = letters.replace(/\[[^\]]*\]/g, '').replace(/am\/pm|a\/p/g, 'h');
  if (plain.includes('%')) return 'percent';
  const clock = /[hs]/.test(plain);
  if (/[yd]/.test(plain)) return clock ? 'datetime' : 'date';
  if (clock) return 'time';
  return plain.includes('m') ? 'date' : 'number';
}
