import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { PALETTE_NAMES } from '@/components/charts/palette';

const css = readFileSync(path.join(import.meta.dirname, '../../../components/ui/tokens.css'), 'utf8');

/** Colours of the first block that follows a selector. */
function colours(selector: string): Record<string, string> {
  const from = css.indexOf(`${selector} {`);
  if (from < 0) throw new Error(`no block for ${selector}`);
  const block = css.slice(from, css.indexOf('}', from));
  const found: Record<string, string> = {};
  for (const [, name = '', hex = ''] of block.matchAll(/--([a-z0-9]+): (#[0-9a-f]{6});/g)) found[name] = hex;
  return found;
}

const light = colours('\n:root');
const dark = colours(":root[data-theme='dark']");

/** Contrast of two colours (WCAG 2.2, definitions of relative luminance and contrast ratio). */
function contrast(one: string, other: string): number {
  const luminance = (hex: string) => {
    const [red = 0, green = 0, blue = 0] = [1, 3, 5].map((at) => {
      const value = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
      return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
    });
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
  };
  const [high = 0, low = 0] = [luminance(one), luminance(other)].sort((a, b) => b - a);
  return (high + 0.05) / (low + 0.05);
}

test('the dark theme is the same whether the system asks for it or the reader', () => {
  expect(colours(":root:not([data-theme='light'])")).toEqual(dark);
});

test('both themes give every colour, and canvases know each of those they draw with', () => {
  expect(Object.keys(dark).sort()).toEqual(Object.keys(light).sort());
  for (const name of PALETTE_NAMES) expect(light).toHaveProperty(name);
});

describe.each([
  ['light', light],
  ['dark', dark],
])('in the %s theme', (_, theme) => {
  const of = (name: string) => theme[name] ?? '#000000';

  // WCAG 2.2, 1.4.3: 4.5 for text of this size.
  test.each(
    ['ink', 'ink2', 'ink3', 'fwd', 'rev'].flatMap((ink) =>
      ['paper', 'sheet', 'tint'].map((ground) => [ink, ground] as const),
    ),
  )('%s is readable on %s', (ink, ground) => {
    expect(contrast(of(ink), of(ground))).toBeGreaterThanOrEqual(4.5);
  });

  // WCAG 2.2, 1.4.11: 3 for marks that carry meaning; the lightest forward ink is always edged in the full one.
  test.each(['fwd', 'fwd2', 'rev', 'ink2', 'ink3'])('the mark %s can be seen on paper', (mark) => {
    expect(contrast(of(mark), of('paper'))).toBeGreaterThanOrEqual(3);
  });
});
