/** Steps are looked for on a grid of this many minutes. */
export const GRID_MINUTES = 5;
const GRID_MS = GRID_MINUTES * 60_000;
export const DAY_SLOTS = 1440 / GRID_MINUTES;
/** A value is held for this long; a longer gap has no steps in it. */
const HELD_MINUTES = 65;
/** A step is a change within a few grid steps of at least this share of the column's usual range, and far beyond its usual change. */
const STEP_OF_RANGE = 0.25;
const STEP_OF_USUAL = 4;
const STEP_GRID_SLOTS = 3;
/** Steps at the same time of day on more than this share of the other days are the day's rhythm, which says nothing of clocks. */
const RHYTHM_SHARE = 0.25;
const RHYTHM_SLOTS = 2;

/** A record of one point: one instant a value, in any order. */
export interface Timed {
  timesMs: Float64Array;
  values: Float64Array;
}

/** Signed steps of a record, by slot of the grid. */
export interface Steps {
  slots: Int32Array;
  /** +1 up, -1 down. */
  signs: Int8Array;
}

/** The steps of a record that are no part of its daily rhythm. */
export function stepsOf({ timesMs, values }: Timed): Steps {
  if (timesMs.length !== values.length)
    throw new RangeError(`stepsOf: ${timesMs.length} times for ${values.length} values`);
  const grid = onGrid(timesMs, values);
  return withoutRhythm(findSteps(grid.values, grid.firstSlot));
}

/** A record longer than this (three years) is looked at from its start only. */
const MOST_SLOTS = 3 * 366 * DAY_SLOTS;

function onGrid(timesMs: Float64Array, values: Float64Array): { values: Float64Array; firstSlot: number } {
  const order = Array.from(timesMs, (_, i) => i).filter(
    (i) => Number.isFinite(timesMs[i]!) && !Number.isNaN(values[i]!),
  );
  order.sort((i, k) => timesMs[i]! - timesMs[k]!);
  if (order.length === 0) return { values: new Float64Array(0), firstSlot: 0 };
  const firstSlot = Math.ceil(timesMs[order[0]!]! / GRID_MS);
  const lastSlot = Math.floor(timesMs[order.at(-1)!]! / GRID_MS);
  const result = new Float64Array(Math.max(0, Math.min(MOST_SLOTS, lastSlot - firstSlot + 1))).fill(Number.NaN);
  let place = 0;
  for (let slot = 0; slot < result.length; slot++) {
    const ms = (firstSlot + slot) * GRID_MS;
    while (place + 1 < order.length && timesMs[order[place + 1]!]! <= ms) place++;
    const at = order[place]!;
    if (timesMs[at]! <= ms && ms - timesMs[at]! <= HELD_MINUTES * 60_000) result[slot] = values[at]!;
  }
  return { values: result, firstSlot };
}

function findSteps(values: Float64Array, firstSlot: number): Steps {
  const changes = new Float64Array(values.length).fill(Number.NaN);
  for (let i = 1; i < values.length; i++) changes[i] = values[i]! - values[Math.max(0, i - STEP_GRID_SLOTS)]!;
  const sorted = values.filter((value) => !Number.isNaN(value)).sort();
  const sizes = changes
    .map(Math.abs)
    .filter((size) => !Number.isNaN(size))
    .sort();
  if (sizes.length === 0) return { slots: new Int32Array(0), signs: new Int8Array(0) };
  const inner = sorted[Math.floor(sorted.length * 0.98)]! - sorted[Math.floor(sorted.length * 0.02)]!;
  // A state that is nearly always the same has no inner range.
  const range = inner > 0 ? inner : sorted.at(-1)! - sorted[0]!;
  const usual = sizes[sizes.length >> 1]!;
  const least = Math.max(range * STEP_OF_RANGE, usual * STEP_OF_USUAL);
  const slots: number[] = [];
  const signs: number[] = [];
  if (!(least > 0)) return { slots: new Int32Array(0), signs: new Int8Array(0) };
  for (let i = 1; i < changes.length; i++) {
    if (!(Math.abs(changes[i]!) >= least)) continue;
    // Within the run of slots that see one step, its place is where the value changes most from slot to slot.
    let best = i;
    let end = i;
    const sign = Math.sign(changes[i]!);
    while (end + 1 < changes.length && Math.sign(changes[end + 1]!) === sign && Math.abs(changes[end + 1]!) >= least)
      end++;
    let most = 0;
    for (let k = Math.max(1, i - STEP_GRID_SLOTS + 1); k <= end; k++) {
      const size = (values[k]! - values[k - 1]!) * sign;
      if (size > most) {
        most = size;
        best = k;
      }
    }
    slots.push(firstSlot + best);
    signs.push(sign);
    i = end;
  }
  return { slots: Int32Array.from(slots), signs: Int8Array.from(signs) };
}

function withoutRhythm({ slots, signs }: Steps): Steps {
  if (slots.length === 0) return { slots, signs };
  const dayOf = (slot: number) => Math.floor(slot / DAY_SLOTS);
  const days = dayOf(slots.at(-1)!) - dayOf(slots[0]!) + 1;
  if (days < 2) return { slots, signs };
  // Days that have a step of a sign at a time of day.
  const seen = new Map<number, Set<number>>();
  const key = (slot: number, sign: number) =>
    (((slot % DAY_SLOTS) + DAY_SLOTS) % DAY_SLOTS) + (sign > 0 ? DAY_SLOTS : 0);
  slots.forEach((slot, i) => {
    for (let near = -RHYTHM_SLOTS; near <= RHYTHM_SLOTS; near++) {
      const at = key(slot + near, signs[i]!);
      const set = seen.get(at) ?? new Set<number>();
      set.add(dayOf(slot));
      seen.set(at, set);
    }
  });
  const kept = Array.from(slots, (_, i) => i).filter((i) => {
    const others = seen.get(key(slots[i]!, signs[i]!))!.size - 1;
    return others <= RHYTHM_SHARE * (days - 1);
  });
  return { slots: Int32Array.from(kept, (i) => slots[i]!), signs: Int8Array.from(kept, (i) => signs[i]!) };
}
