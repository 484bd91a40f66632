import { describe, expect, test } from 'vitest';
import { STILL_GAP_PX, teeDrawing, teeScale, type Rect, type TeeFlows } from '@/components/tees/tee-geometry';

const BOX = { left: 150, right: 712, top: 112, bottom: 404, pipe: 386, pxPerGpm: 0.03 };
const flows = (given: Partial<TeeFlows>): TeeFlows => ({
  direction: 'reverse',
  productionGpm: 1720,
  distributionGpm: 2686,
  bypassGpm: -966,
  bypassLoGpm: -1059,
  bypassHiGpm: -872,
  ...given,
});
const bottomOf = (rect: Rect) => rect.y + rect.height;

describe('reverse', () => {
  const drawing = teeDrawing(flows({}), BOX);

  test('bands meet without loss: the stripe in the supply is as wide as the pipe and the step of the return', () => {
    const wide = 966 * BOX.pxPerGpm;
    expect(drawing.pipeWidth).toBeCloseTo(wide, 6);
    expect(drawing.supplyRight - drawing.supplyLeft).toBeCloseTo(wide, 6);
    expect(drawing.returnLeft - drawing.returnRight).toBeCloseTo(wide, 6);
  });

  test('the supply to the buildings is as thick as their flow, and so is their return', () => {
    expect(drawing.supplyRight - BOX.top).toBeCloseTo(2686 * BOX.pxPerGpm, 6);
    expect(BOX.bottom - drawing.returnRight).toBeCloseTo(2686 * BOX.pxPerGpm, 6);
  });

  test('the stripe’s share is the blend', () => {
    expect(drawing.crossingShare).toBeCloseTo(966 / 2686, 9);
  });

  test('production water is solid, and only there; the rest is hatched', () => {
    expect(drawing.solid).toHaveLength(1);
    expect(drawing.solid[0]?.height).toBeCloseTo(1720 * BOX.pxPerGpm, 6);
    expect(Math.max(...drawing.hatch.map(bottomOf))).toBe(BOX.bottom);
  });

  test('an arrow points up in the pipe', () => {
    expect(drawing.arrows.some((arrow) => arrow.to === 'up' && arrow.on === 'hatch')).toBe(true);
  });
});

describe('forward', () => {
  const drawing = teeDrawing(
    flows({
      direction: 'forward',
      productionGpm: 2580,
      distributionGpm: 1986,
      bypassGpm: 594,
      bypassLoGpm: 534,
      bypassHiGpm: 654,
    }),
    BOX,
  );

  test('the solid stripe lies in the return, as wide as the pipe', () => {
    expect(drawing.returnRight - drawing.returnLeft).toBeCloseTo(594 * BOX.pxPerGpm, 6);
    expect(drawing.crossingShare).toBeCloseTo(594 / 2580, 9);
    expect(drawing.arrows.some((arrow) => arrow.to === 'down' && arrow.on === 'solid')).toBe(true);
  });

  test('return water is hatched in its band alone', () => {
    expect(drawing.hatch).toHaveLength(1);
  });
});

test('still is an empty gap with a bead, and nothing crosses', () => {
  const drawing = teeDrawing(
    flows({ direction: 'still', productionGpm: 1720, distributionGpm: 1728, bypassGpm: -8 }),
    BOX,
  );
  expect(drawing.pipeWidth).toBe(STILL_GAP_PX);
  expect(drawing.bead).not.toBeNull();
  expect(drawing.dots).toBeNull();
  expect(drawing.crossingShare).toBeNull();
});

describe('unknown', () => {
  const unknown = flows({ direction: 'unknown', bypassGpm: null, bypassLoGpm: -670, bypassHiGpm: 750 });

  test('the pipe is dotted, as wide as its interval, and has no arrow', () => {
    const drawing = teeDrawing(unknown, BOX);
    expect(drawing.dots?.width).toBeCloseTo(1420 * BOX.pxPerGpm, 6);
    expect(drawing.arrows.every((arrow) => arrow.to === 'left' || arrow.to === 'right')).toBe(true);
    expect(drawing.crossingShare).toBeNull();
  });

  test('without flows or interval the sheet is still drawn', () => {
    const drawing = teeDrawing(
      flows({
        direction: 'unknown',
        productionGpm: null,
        distributionGpm: null,
        bypassGpm: null,
        bypassLoGpm: null,
        bypassHiGpm: null,
      }),
      BOX,
    );
    expect(drawing.solid[0]?.height).toBeGreaterThan(0);
    expect(drawing.dots?.width).toBeGreaterThan(0);
  });
});

test('walls are broken when the interval reaches over zero, and whole when it does not', () => {
  expect(teeDrawing(flows({ bypassLoGpm: -1100, bypassHiGpm: 40 }), BOX).wallsBroken).toBe(true);
  expect(teeDrawing(flows({}), BOX).wallsBroken).toBe(false);
});

test('a flow that is not metered is taken from the other and the bypass', () => {
  const drawing = teeDrawing(flows({ productionGpm: null }), BOX);
  expect(drawing.supplyLeft - BOX.top).toBeCloseTo(1720 * BOX.pxPerGpm, 6);
});

test('flows that contradict the direction are not forced into a picture of it', () => {
  expect(teeDrawing(flows({ productionGpm: 2700, distributionGpm: 2686 }), BOX).dots).not.toBeNull();
});

test('one scale for several sheets is that of the largest flow', () => {
  expect(teeScale([flows({}), flows({ productionGpm: 4000 })], 80)).toBeCloseTo(0.02, 9);
});
