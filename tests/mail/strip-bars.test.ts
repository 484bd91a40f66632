import { expect, it } from 'vitest';
import { STRIP_PIXELS, stripBars } from '@/lib/mail/strip-bars';
import { ternQuay } from './tern-quay';

it('draws forward up and backward down on one scale', () => {
  const { bars, upPixels, downPixels } = stripBars(ternQuay().hours);
  // The largest forward hour is 660 gpm, the largest backward one 966: they share the strip's height in that proportion.
  expect(upPixels).toBe(Math.round((STRIP_PIXELS * 660) / (660 + 966)));
  expect(downPixels).toBe(Math.round((STRIP_PIXELS * 966) / (660 + 966)));
  expect(bars[15]).toMatchObject({ upPixels: 0, downPixels });
  expect(bars[22]).toMatchObject({ upPixels, downPixels: 0, marks: 0 });
});

it('keeps the smallest flow in sight and gives slack no bar', () => {
  const { bars } = stripBars(ternQuay().hours);
  expect(bars[2]?.downPixels).toBe(2); // 17 gpm of 966
  expect(bars[1]).toMatchObject({ kind: 'still', upPixels: 0, downPixels: 0 });
});

it('splits an hour that went both ways', () => {
  const { bars } = stripBars([{ startMs: 0, forwardGpm: 100, reverseGpm: 50, kind: 'forward' }]);
  expect(bars[0]).toMatchObject({ upPixels: 64, downPixels: 32 });
});

it('draws a day without any flow known', () => {
  const { bars } = stripBars([{ startMs: 0, forwardGpm: 0, reverseGpm: 0, kind: 'no-data' }]);
  expect(bars[0]).toMatchObject({ upPixels: 0, downPixels: 0 });
});
