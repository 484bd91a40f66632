import printed from './accuracy.json';

/** A measure as the accuracy bench prints it, and the goal that was set for it. */
export interface Measure {
  value: number;
  atLeast?: number;
  atMost?: number;
}
export interface PlantGroup {
  plants: number;
  intervals: number;
  measures: Partial<Record<string, Measure>>;
}
interface Run {
  groups: Partial<Record<string, PlantGroup>>;
  plants: Partial<Record<string, Partial<Record<string, number>>>>;
}

/** What tests/bench/write-accuracy.ts kept of the bench: fleets 0 to 3, and fleet 0 with sensors that have no lasting error. */
export const ACCURACY: { kernelVersion: string; fleets: readonly Run[]; perfect: Run } = printed;

/** The measure that says most: still and trickles apart. */
export const RIGHT_BEYOND_5 = 'direction right, |b| > 5 %';

/** The plant of fleet 0 whose primary flow swings about balance every few minutes. */
export const HUNTING = 'both-meters near-balance 1007';

const NOBODY: PlantGroup = { plants: 0, intervals: 0, measures: {} };

/** A group of a fleet; one that the bench does not print has no plants. */
export const groupOf = (group: string, fleet = 0): PlantGroup => ACCURACY.fleets[fleet]?.groups[group] ?? NOBODY;

/** A measure of a group; NaN where the bench prints none. */
export const measureOf = (group: PlantGroup, measure: string): Measure =>
  group.measures[measure] ?? { value: Number.NaN };

/** Least and most of a column of fleet 0, over the plants whose name holds a text; Infinity where there are none. */
export function extremes(name: string, head: string): { least: number; most: number } {
  const plants = Object.entries(ACCURACY.fleets[0]?.plants ?? {}).filter(([plant]) => plant.includes(name));
  const values = plants.flatMap(([, of]) => of?.[head] ?? []);
  return { least: Math.min(...values), most: Math.max(...values) };
}

/** Whether a measure keeps its goal; one without a goal keeps it. */
export const keepsGoal = ({ value, atLeast = -Infinity, atMost = Infinity }: Measure): boolean =>
  !(value < atLeast || value > atMost);
