import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { DARK, LIGHT, type Inks } from '@/lib/mail/inks';

const tokens = readFileSync('components/ui/tokens.css', 'utf8');

/** The values of the custom properties in the block that follows `opening`. */
function block(opening: RegExp): Record<string, string> {
  const start = tokens.search(opening);
  const body = tokens.slice(start, tokens.indexOf('}', start));
  return Object.fromEntries(
    [...body.matchAll(/--([\w]+): (#[0-9a-f]{6})/g)].map(([, name = '', value = '']) => [name, value]),
  );
}

/** WCAG 2.2, relative luminance and contrast ratio (definitions in section 6). */
function contrast(left: string, right: string): number {
  const luminance = (hex: string) => {
    const [r = 0, g = 0, b = 0] = [1, 3, 5].map((at) => {
      const part = parseInt(hex.slice(at, at + 2), 16) / 255;
      return part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4;
    });
    return 0.2126 * r + 0.7152 * g + 0.0722 * b;
  };
  const [lighter = 0, darker = 0] = [luminance(left), luminance(right)].sort((a, b) => b - a);
  return (lighter + 0.05) / (darker + 0.05);
}

describe('the inks of a mail', () => {
  it.each([
    ['light', LIGHT, block(/:root \{/)],
    ['dark', DARK, block(/prefers-color-scheme: dark/)],
  ])('are the product’s own tokens, %s', (_name, inks, properties) => {
    for (const [name, value] of Object.entries(inks)) expect(properties[name], name).toBe(value);
  });

  // AA asks 4.5 of text (WCAG 2.2, 1.4.3). Every pair the mail sets text in.
  it.each([
    ['light', LIGHT],
    ['dark', DARK],
  ])('hold a contrast of at least 4.5, %s', (_name, inks: Inks) => {
    const pairs: [keyof Inks, keyof Inks][] = [
      ['ink', 'paper'],
      ['ink2', 'paper'],
      ['paper', 'ink'],
      ['paper', 'rev'],
    ];
    for (const [text, ground] of pairs)
      expect(contrast(inks[text], inks[ground]), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
  });
});
