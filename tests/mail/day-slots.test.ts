import { describe, expect, it } from 'vitest';
import type { ResultDay } from '@/lib/db/blocks';
import { DIRECTIONS, STATES } from '@/lib/hydronics/types';
import { daySlots } from '@/lib/mail/read-day';

const STEP = 60;
const [FORWARD, REVERSE] = [DIRECTIONS.indexOf('forward'), DIRECTIONS.indexOf('reverse')];

function resultDay(day: string, stepMinutes = STEP): ResultDay {
  const filled = (value: number) => new Float32Array(1440 / stepMinutes).fill(value);
  const channels = {
    direction: filled(REVERSE),
    state: filled(STATES.indexOf('running')),
    bypass_flow_gpm: filled(-100),
  };
  return { day, stepMinutes, settingsRevision: 1, calibrationId: 0, kernelVersion: 'test', channels };
}
const at = (text: string) => Date.parse(text);
const DAY = [at('2026-07-24T04:00:00Z'), at('2026-07-25T04:00:00Z')] as const;

describe('daySlots', () => {
  it('takes the local day out of the two UTC days it lies in', () => {
    const slots = daySlots([resultDay('2026-07-24'), resultDay('2026-07-25')], STEP, ...DAY);
    expect(slots).toHaveLength(24);
    expect([slots[0]?.startMs, slots.at(-1)?.startMs]).toEqual([DAY[0], at('2026-07-25T03:00:00Z')]);
  });

  it.each(STATES.filter((state) => state !== 'running'))(
    'does not count flow backwards while the plant is %s',
    (state) => {
      const day = resultDay('2026-07-24');
      day.channels.state?.fill(STATES.indexOf(state));
      expect(daySlots([day], STEP, ...DAY).some((slot) => slot.reverse)).toBe(false);
    },
  );

  it('goes by the direction, not by the sign of the flow', () => {
    const day = resultDay('2026-07-24');
    day.channels.direction?.fill(FORWARD);
    expect(daySlots([day], STEP, ...DAY).some((slot) => slot.reverse)).toBe(false);
  });

  it('leaves out a day kept at a step that the plant no longer has', () => {
    expect(daySlots([resultDay('2026-07-24', 30)], STEP, ...DAY)).toEqual([]);
  });

  it('has NaN for a channel that was not read', () => {
    expect(daySlots([resultDay('2026-07-24')], STEP, ...DAY)[0]).toMatchObject({
      bypassFlowGpm: -100,
      blendedSupplyF: NaN,
    });
  });
});
