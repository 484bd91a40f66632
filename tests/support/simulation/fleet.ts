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

/** What the fleet holds: eleven plants for each kind of sensing, three of them near balance. */
export function fleetOptions(): SimulationOptions[] {
  return SENSINGS.flatMap((sensing, kind) =>
    BALANCES.map((balance, index) => ({
      seed: 1000 * (kind + 1) + index,
      sensing,
      balance,
      // One plant near balance hunts from one side to the other within the interval.
      hunting: sensing === 'both-meters' && index === 7,
    })),
  );
}

/** About forty varied plants, a week at five minutes each, always the same. */
export const simulatedFleet = (): SimulatedPlant[] => fleetOptions().map(simulatePlant);
