import { expect, test } from 'vitest';
import { ledgerBars, ledgerLines, printedAmounts, signWord } from '@/components/charts/ledger-lines';

const PARTS = {
  designDeltaTF: 14,
  expectedDeltaTF: 13.3,
  loadF: 8.7,
  blendF: 4.93,
  dilutionF: 0.03,
  productionF: 13.6,
};

test('the account leads from design to what the units got, and its printed figures close', () => {
  const printed = printedAmounts(ledgerLines(PARTS), 'ip');
  expect(printed).toEqual([14, -0.7, -4.6, 8.7, 4.9, 0, 13.6]);
});

test('it closes in kelvin too, where everything rounds otherwise', () => {
  const [design = 0, expectation = 0, shortfall = 0, load = 0, blend = 0, dilution = 0, production = 0] =
    printedAmounts(ledgerLines(PARTS), 'si');
  expect(design + expectation + shortfall).toBeCloseTo(load, 9);
  expect(load + blend + dilution).toBeCloseTo(production, 9);
});

test('dilution is taken off, and keeps its word at zero', () => {
  const lines = ledgerLines({ ...PARTS, dilutionF: 0 });
  const words = Object.fromEntries(lines.map((line) => [line.key, signWord(line)]));
  expect(words).toMatchObject({ design: '', expectation: 'less', shortfall: 'less', blend: 'plus', dilution: 'less' });
});

test('without an expectation the whole distance to design is the load’s', () => {
  const lines = ledgerLines({ ...PARTS, expectedDeltaTF: null });
  expect(lines.map((line) => line.key)).toEqual(['design', 'shortfall', 'load', 'blend', 'dilution', 'production']);
  expect(lines[1]?.amountF).toBeCloseTo(-5.3, 9);
});

test('without a design the account begins with the load', () => {
  expect(ledgerLines({ ...PARTS, designDeltaTF: null })[0]?.key).toBe('load');
});

test('each bar begins where the running sum stands, and an unknown line has none', () => {
  const bars = ledgerBars(ledgerLines({ ...PARTS, blendF: null }));
  expect(bars[0]).toEqual({ fromF: 0, toF: 14 });
  expect(bars[1]?.fromF).toBe(14);
  expect(bars[1]?.toF).toBeCloseTo(13.3, 9);
  expect(bars[4]).toBeNull();
});
