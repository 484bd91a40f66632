import type { SensorChannel } from './sensor-channels';

/** Values missing for this long are shown as a stretch, and end a run of one value; shorter holes are passed over. */
const GAP_MINUTES = 60;

/** Slots fromSlot..toSlot, half-open. */
export interface Run {
  fromSlot: number;
  toSlot: number;
}

/** What one pass over a channel finds. */
export interface ChannelScan {
  /** Missing for an hour or more. */
  missing: Run[];
  /** Readings that cannot be. */
  outside: Run[];
  /** One value, exactly, for at least so many slots; the ends are not missing. */
  held: Run[];
  /** Slots that lie beyond the one before by more than the least jump. */
  jumps: number[];
}

export const gapSlots = (stepMinutes: number): number => Math.max(1, Math.floor(GAP_MINUTES / stepMinutes));

/**
 * One pass over a channel: gaps, impossible readings, values held, jumps.
 *
 * Units   `leastJump` deg F or gpm. Gaps: NaN is missing; readings that cannot be are passed over by runs and jumps.
 */
export function scanChannel(
  channel: SensorChannel,
  stepMinutes: number,
  leastHeldSlots: number,
  leastJump: number,
): ChannelScan {
  const { values, lo, hi } = channel;
  const gap = gapSlots(stepMinutes);
  const leastMissing = GAP_MINUTES / stepMinutes;
  const [missing, outside, held, jumps]: [Run[], Run[], Run[], number[]] = [[], [], [], []];
  // The stretch of unusable values under way; -1: none.
  let badFrom = -1;
  let badIsMissing = false;
  const endBad = (slot: number) => {
    if (!badIsMissing) outside.push({ fromSlot: badFrom, toSlot: slot });
    else if (slot - badFrom >= leastMissing) missing.push({ fromSlot: badFrom, toSlot: slot });
    badFrom = -1;
  };
  let heldFrom = 0;
  let last = -1;
  let value = Number.NaN;
  let before = Number.NaN;
  for (let slot = 0; slot < values.length; slot += 1) {
    const now = values[slot] as number;
    if (now >= lo && now <= hi) {
      if (badFrom >= 0) endBad(slot);
      if (now !== value || slot - last > gap) {
        if (last + 1 - heldFrom >= leastHeldSlots) held.push({ fromSlot: heldFrom, toSlot: last + 1 });
        heldFrom = slot;
        value = now;
        // NaN, from a missing value before, compares false.
        if (Math.abs(now - before) > leastJump) jumps.push(slot);
      }
      last = slot;
    } else {
      const isMissing = now !== now;
      if (badFrom >= 0 && isMissing !== badIsMissing) endBad(slot);
      if (badFrom < 0) {
        badFrom = slot;
        badIsMissing = isMissing;
      }
    }
    before = now;
  }
  if (last + 1 - heldFrom >= leastHeldSlots) held.push({ fromSlot: heldFrom, toSlot: last + 1 });
  if (badFrom >= 0) endBad(values.length);
  return { missing, outside, held, jumps };
}
