import { describe, expect, it } from 'vitest';
import {
  BRIDGE_MINUTES,
  isBridged,
  MOST_STRETCHES,
  reverseStretches,
  shortlist,
  type DaySlot,
} from '@/lib/mail/reverse-stretches';

const STEP = 5;
const minute = 60_000;

/** Slots of 5 minutes from a drawing: R is reverse, . is not, a blank has no slot. Flow and supply count up with the slot. */
function drawn(picture: string): DaySlot[] {
  return picture.split('').flatMap((mark, at) =>
    mark === ' '
      ? []
      : [
          {
            startMs: at * STEP * minute,
            reverse: mark === 'R',
            bypassFlowGpm: -(100 + at),
            bypassFlowLoGpm: NaN,
            bypassFlowHiGpm: NaN,
            blendedSupplyF: 44 + at / 10,
            primarySupplyF: 44,
            primaryFlowGpm: NaN,
            secondaryFlowGpm: NaN,
          },
        ],
  );
}
const spans = (picture: string) =>
  reverseStretches(drawn(picture), STEP).map((each) => [
    each.startMs / minute,
    each.endMs / minute,
    each.reverseMinutes,
  ]);

describe('reverseStretches', () => {
  it('ends a stretch with its last reverse interval', () => {
    expect(spans('..RRR.....RR')).toEqual([
      [10, 25, 15],
      [50, 60, 10],
    ]);
  });

  it(`joins stretches less than ${BRIDGE_MINUTES} min apart, counting reverse minutes only`, () => {
    expect(spans('RR..RR')).toEqual([[0, 30, 20]]);
    expect(spans('RR...RR')).toEqual([
      [0, 10, 10],
      [25, 35, 10],
    ]);
    expect(isBridged(reverseStretches(drawn('RR..RR'), STEP))).toBe(true);
    expect(isBridged(reverseStretches(drawn('RRRR'), STEP))).toBe(false);
  });

  it('takes missing data for a gap by the clock, not by the number of slots', () => {
    expect(spans('RR     RR')).toEqual([
      [0, 10, 10],
      [35, 45, 10],
    ]);
  });

  it('gives the largest backward flow as a positive amount and the warmest supply', () => {
    const [stretch] = reverseStretches(drawn('.RRR.'), STEP);
    expect(stretch?.largestFlowGpm).toBe(103);
    expect(stretch?.warmestSupplyF).toBeCloseTo(44.3, 10);
  });

  it('is not led astray by intervals without a flow or a temperature', () => {
    const slots = drawn('RRR').map((slot, at) =>
      at === 1 ? slot : { ...slot, bypassFlowGpm: NaN, blendedSupplyF: NaN },
    );
    expect(reverseStretches(slots, STEP)[0]).toMatchObject({
      largestFlowGpm: 101,
      warmestSupplyF: 44.1,
      reverseMinutes: 15,
    });
  });

  it('finds none in a day without reverse flow', () => {
    expect(reverseStretches(drawn('....'), STEP)).toEqual([]);
  });

  it('refuses a step that is not positive', () => {
    expect(() => reverseStretches([], 0)).toThrow(RangeError);
  });
});

describe('shortlist', () => {
  const stretch = (start: number, reverseMinutes: number, largestFlowGpm = 10, warmestSupplyF = 45) => ({
    startMs: start,
    endMs: start + reverseMinutes * minute,
    reverseMinutes,
    largestFlowGpm,
    warmestSupplyF,
  });

  it('leaves a short list alone', () => {
    const few = [stretch(1, 5), stretch(2, 5)];
    expect(shortlist(few)).toEqual({ shown: few, further: { count: 0, minutes: 0 } });
  });

  it('keeps the largest and the warmest however short, in order of time, and no minute is lost', () => {
    const many = [
      ...Array.from({ length: 10 }, (_, at) => stretch(at, 20 + at)),
      stretch(20, 5, 900),
      stretch(21, 5, 10, 51),
    ];
    const { shown, further } = shortlist(many);
    expect(shown).toHaveLength(MOST_STRETCHES);
    expect(shown.map((each) => each.startMs)).toEqual([6, 7, 8, 9, 20, 21]);
    const total = many.reduce((sum, each) => sum + each.reverseMinutes, 0);
    expect(shown.reduce((sum, each) => sum + each.reverseMinutes, 0) + further.minutes).toBe(total);
    expect(further.count).toBe(many.length - MOST_STRETCHES);
  });
});
