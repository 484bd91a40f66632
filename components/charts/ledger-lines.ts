import { closeAccount } from '@/lib/client/rounding';
import { decimalsOf, toPrinted, type UnitSystem } from '@/lib/client/format';

/** What a bar of the ledger is drawn with: standing delta-T black, load side grey, blend rise hatch, dilution blue. */
export type LedgerInk = 'total' | 'load' | 'blend' | 'dilution';

export interface LedgerLine {
  key: string;
  kind: 'total' | 'change';
  label: string;
  /** Signed; null where it is not known. */
  amountF: number | null;
  plusMinusF?: number | null;
  ink: LedgerInk;
}

export interface LedgerParts {
  designDeltaTF: number | null;
  expectedDeltaTF: number | null;
  loadF: number | null;
  blendF: number | null;
  /** Positive; it is taken off. */
  dilutionF: number | null;
  productionF: number | null;
}

const difference = (to: number | null, from: number | null): number | null =>
  to === null || from === null ? null : to - from;

/**
 * The lines from design delta-T to what the units got. Lines above the load delta-T are left out where neither design
 * nor expectation is known.
 */
export function ledgerLines(parts: LedgerParts): LedgerLine[] {
  const { designDeltaTF, expectedDeltaTF, loadF, blendF, dilutionF, productionF } = parts;
  const opening: LedgerLine[] =
    designDeltaTF === null
      ? []
      : [
          { key: 'design', kind: 'total', label: 'design load delta-T', amountF: designDeltaTF, ink: 'total' },
          ...(expectedDeltaTF === null
            ? []
            : [change('expectation', 'part-load expectation', difference(expectedDeltaTF, designDeltaTF), 'load')]),
          change('shortfall', 'shortfall at the load', difference(loadF, expectedDeltaTF ?? designDeltaTF), 'load'),
        ];
  return [
    ...opening,
    { key: 'load', kind: 'total', label: 'load delta-T', amountF: loadF, ink: 'total' },
    change('blend', 'blend rise', blendF, 'blend'),
    change('dilution', 'dilution', dilutionF === null ? null : -dilutionF, 'dilution'),
    { key: 'production', kind: 'total', label: 'production delta-T', amountF: productionF, ink: 'total' },
  ];
}

const change = (key: string, label: string, amountF: number | null, ink: LedgerInk): LedgerLine => ({
  key,
  kind: 'change',
  label,
  amountF,
  ink,
});

/** "less" or "plus" before a change; a line that takes off keeps its word at zero. */
export function signWord(line: LedgerLine): string {
  if (line.kind === 'total' || line.amountF === null) return '';
  if (line.amountF > 0) return 'plus';
  if (line.amountF < 0) return 'less';
  return line.ink === 'blend' ? 'plus' : 'less';
}

/** Amounts as printed, in the reader's unit, closing line by line; NaN where not known. */
export const printedAmounts = (lines: readonly LedgerLine[], units: UnitSystem): number[] =>
  closeAccount(
    lines.map((line) => ({ kind: line.kind, amount: toPrinted(line.amountF, 'temperatureDifference', units) })),
    decimalsOf('temperatureDifference', units),
  );

export interface LedgerBar {
  fromF: number;
  toF: number;
}

/** Where each bar begins and ends on the degree scale; null where a line is not known. */
export function ledgerBars(lines: readonly LedgerLine[]): (LedgerBar | null)[] {
  let running = 0;
  return lines.map((line) => {
    if (line.amountF === null) return null;
    if (line.kind === 'total') {
      running = line.amountF;
      return { fromF: 0, toF: line.amountF };
    }
    const bar = { fromF: running, toF: running + line.amountF };
    running = bar.toF;
    return bar;
  });
}
