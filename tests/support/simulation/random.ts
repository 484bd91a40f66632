/** A seeded source of random numbers. Streams of different names are independent, so that one draw more moves nothing else. */
export interface RandomSource {
  /** Uniform in [0, 1). */
  uniform: () => number;
  between: (low: number, high: number) => number;
  /** Standard normal. */
  normal: () => number;
  /** Normal of a standard deviation, drawn again until within +/- limit. */
  within: (sigma: number, limit: number) => number;
  chance: (probability: number) => boolean;
  pick: <Value>(values: readonly Value[]) => Value;
}

/** FNV-1a hash of a name, mixed with the seed. */
function hashOf(seed: number, name: string): number {
  let hash = (2_166_136_261 ^ seed) >>> 0;
  for (let index = 0; index < name.length; index += 1)
    hash = Math.imul(hash ^ name.charCodeAt(index), 16_777_619) >>> 0;
  return Math.imul(hash ^ (hash >>> 15), 2_246_822_519) >>> 0;
}

/** The random stream of a seed and a name (mulberry32 with the polar form of a normal). */
export function randomSource(seed: number, name: string): RandomSource {
  let state = hashOf(seed, name);
  const uniform = () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
  const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
  return {
    uniform,
    normal,
    between: (low, high) => low + (high - low) * uniform(),
    within: (sigma, limit) => {
      for (;;) {
        const value = sigma * normal();
        if (Math.abs(value) <= limit) return value;
      }
    },
    chance: (probability) => uniform() < probability,
    pick: (values) => values[Math.floor(uniform() * values.length)]!,
  };
}

/** A wandering quantity of mean 0: standard deviation `sigma`, forgetting over `tauMinutes` (Ornstein-Uhlenbeck). */
export function wander(random: RandomSource, sigma: number, tauMinutes: number, stepMinutes: number): () => number {
  const keep = Math.exp(-stepMinutes / tauMinutes);
  const kick = sigma * Math.sqrt(1 - keep * keep);
  let value = sigma * random.normal();
  return () => (value = keep * value + kick * random.normal());
}
