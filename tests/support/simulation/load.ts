import type { SimulatedDesign } from './design';
import { randomSource, wander } from './random';

const DAY_MINUTES = 1440;

/** Rises from 0 to 1 over `width` minutes about `centre`. */
const rise = (minute: number, centre: number, width: number): number =>
  1 / (1 + Math.exp((-4 * (minute - centre)) / width));

/**
 * Coil load as share of design at each fine step: a day's use and weather, weaker weekends, a wandering season and
 * short fluctuations. The record starts at midnight; days five and six of each week are the weekend.
 */
export function loadShares(design: SimulatedDesign, seed: number, steps: number, stepMinutes: number): Float64Array {
  const random = randomSource(seed, 'load');
  const season = wander(random, 0.12, 2 * DAY_MINUTES, stepMinutes);
  const slow = wander(random, random.between(0.02, 0.05), 60, stepMinutes);
  const fast = wander(random, random.between(0.005, 0.02), 6, stepMinutes);
  const opens = random.between(360, 480);
  const closes = random.between(1020, 1200);
  const shares = new Float64Array(steps);
  for (let step = 0; step < steps; step += 1) {
    const minute = (step * stepMinutes) % DAY_MINUTES;
    const day = Math.floor((step * stepMinutes) / DAY_MINUTES) % 7;
    const use = rise(minute, opens, 120) * (1 - rise(minute, closes, 150));
    const weather = 0.5 + 0.5 * Math.cos((2 * Math.PI * (minute - 930)) / DAY_MINUTES);
    const swing = (0.55 * use + 0.45 * weather) * (day >= 5 ? design.weekendShare : 1) + season();
    const share = design.baseLoad + (design.peakLoad - design.baseLoad) * swing;
    shares[step] = Math.min(1.02, Math.max(0.08, share * (1 + slow() + fast())));
  }
  return shares;
}

/** 1 while the plant is wanted, 0 in the nights of a plant that is shut down. */
export function wanted(design: SimulatedDesign, minute: number): boolean {
  if (!design.nightOff) return true;
  const ofDay = minute % DAY_MINUTES;
  return ofDay >= 330 && ofDay < 1260;
}
