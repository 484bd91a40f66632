import { roundHalfAway } from './format';

/**
 * Rounds the parts of a sum so that what is printed adds up: the total is rounded first, each part is rounded, and what
 * is then missing or too much goes to the larger line (the part of largest magnitude; the first of equals).
 *
 * Shapes  as many parts out as in.
 * Gaps    a part that is NaN stays NaN and counts as nothing; all NaN: the total is NaN.
 * Throws  RangeError when `decimals` is not a whole number of 0 to 12.
 */
export function closeSum(
  parts: readonly number[],
  decimals: number,
  total: number = sum(parts),
): { parts: number[]; total: number } {
  if (!Number.isInteger(decimals) || decimals < 0 || decimals > 12) {
    throw new RangeError(`closeSum: decimals must be a whole number of 0 to 12 (${decimals})`);
  }
  const scale = 10 ** decimals;
  const roundedTotal = roundHalfAway(total, decimals);
  const steps = parts.map((part) => Math.round(roundHalfAway(part, decimals) * scale));
  const known = steps.filter((step) => !Number.isNaN(step));
  if (known.length === 0 || Number.isNaN(roundedTotal)) {
    return { parts: steps.map((step) => step / scale), total: roundedTotal };
  }
  // Counted in whole steps of the last place: sums of decimals would not close.
  const remainder = Math.round(roundedTotal * scale) - known.reduce((left, right) => left + right, 0);
  if (remainder !== 0) {
    const larger = largestIndex(parts);
    steps[larger] = (steps[larger] ?? 0) + remainder;
  }
  return { parts: steps.map((step) => step / scale), total: roundedTotal };
}

/** One line of an account: a total stands, a change leads from one total to the next. */
export interface AccountLine {
  kind: 'total' | 'change';
  amount: number;
}

/**
 * Rounds an account line by line: every total first, then the changes between two totals so that they lead from the one
 * printed to the other (`closeSum` of each stretch).
 *
 * Gaps    a stretch with a NaN total or no change at all is rounded line by line, nothing is moved.
 */
export function closeAccount(lines: readonly AccountLine[], decimals: number): number[] {
  const printed = lines.map((line) => roundHalfAway(line.amount, decimals));
  let opening = -1;
  lines.forEach((line, index) => {
    if (line.kind !== 'total') return;
    const changes = opening < 0 ? [] : range(opening + 1, index);
    if (changes.length > 0) {
      const step = (printed[index] ?? Number.NaN) - (printed[opening] ?? Number.NaN);
      const closed = closeSum(
        changes.map((change) => lines[change]?.amount ?? Number.NaN),
        decimals,
        step,
      );
      changes.forEach((change, place) => {
        printed[change] = closed.parts[place] ?? Number.NaN;
      });
    }
    opening = index;
  });
  return printed;
}

const sum = (parts: readonly number[]): number => {
  const known = parts.filter((part) => !Number.isNaN(part));
  return known.length === 0 ? Number.NaN : known.reduce((left, right) => left + right, 0);
};

const range = (from: number, to: number): number[] => Array.from({ length: to - from }, (_, index) => from + index);

function largestIndex(parts: readonly number[]): number {
  let larger = 0;
  let size = -1;
  parts.forEach((part, index) => {
    if (Math.abs(part) > size) {
      size = Math.abs(part);
      larger = index;
    }
  });
  return larger;
}
