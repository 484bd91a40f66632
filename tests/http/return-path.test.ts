import { expect, test } from 'vitest';
import { returnPath } from '@/lib/http/return-path';

test.each(['/plants', '/plants/1/hours?rank=cost#list'])('keeps %s, a path of this site', (path) => {
  expect(returnPath(path, '/plants')).toBe(path);
});

test.each([
  '//evil.example',
  '/\\evil.example',
  '/\t/evil.example',
  '/\n/evil.example',
  'https://evil.example/',
  'plants',
  '',
  undefined,
  ['/a', '/b'],
])('does not follow %j off the site', (next) => {
  expect(returnPath(next, '/plants')).toBe('/plants');
});
