import { simulatePlant } from './simulate';
import type { Balance, Sensing, SimulatedPlant, SimulationOptions } from './types';

const SENSINGS: readonly Sensing[] = ['both-meters', 'pump-status', 'one-meter', 'temperatures'];
const BALANCES: readonly Balance[] = [
  'varied',
  'varied',
  'varied',
  'varied',
  'varied',
  'near-balance',
  'near-balance',
  'near-balance',
  'mostly-forward',
  'mostly-reverse',
  'mostly-reverse',
];

/** Plants that the draw makes seldom or never. */
const SPECIAL: readonly Omit<SimulationOptions, 'seed'>[] = [
  { name: 'both-meters sampled at the end', sensing: 'both-meters', balance: 'varied', sampling: 'end' },
  { name: 'both-meters unsigned bypass', sensing: 'both-meters', balance: 'varied', bypassMeter: 'unsigned' },
  { name: 'pump-status no primary return', sensing: 'pump-status', balance: 'varied', lacking: 'primaryReturnF' },
  // Rated flow times status must not be believed here: the pumps follow the load.
  {
    name: 'one-meter variable with status',
    sensing: 'one-meter',
    balance: 'varied',
    meter: 'secondary',
    primarySpeed: 'variable',
    unitStatus: true,
  },
  { name: 'temperatures variable', sensing: 'temperatures', balance: 'varied', primarySpeed: 'variable' },
];

/**
 * What a fleet holds: eleven plants for each kind of sensing, three of them near balance, and a few special ones.
 * `variant` picks other seeds: a kernel tuned on one fleet is tried on another.
 */
export function fleetOptions(variant = 0): SimulationOptions[] {
  const base = 100_000 * variant;
  const drawn = SENSINGS.flatMap((sensing, kind) =>
    BALANCES.map((balance, index) => ({
      seed: base + 1000 * (kind + 1) + index,
      sensing,
      balance,
      // One plant near balance hunts from one side to the other within the interval.
      hunting: sensing === 'both-meters' && index === 7,
    })),
  );
  return [...drawn, ...SPECIAL.map((options, index) => ({ ...options, seed: base + 5000 + index }))];
}

/** About fifty varied plants, a week at five minutes each, always the same. */
export const simulatedFleet = (variant = 0): SimulatedPlant[] =>
  fleetOptions(variant).map((options) => simulatePlant(options));
