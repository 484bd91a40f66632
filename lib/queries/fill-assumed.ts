import type { PlantModel } from '../hydronics/types';
import type { PlantSettings } from '../schemas/plant';

/** Where the model keeps the number that stands in for a settings path. */
function modelPath(path: string): string[] {
  const steps = path.split('.');
  const [first = '', second = '', ...rest] = steps;
  if (first === 'sensors') return ['sensors', rest[0] === 'sigmaF' ? 'temperatureSigmaF' : 'flowSigmaPercent', second];
  if (path === 'design.pumping.speed') return ['primarySpeed'];
  if (second === 'productionUnits') return ['units', ...rest];
  return steps.slice(1);
}

const at = (tree: unknown, steps: readonly string[]): unknown =>
  steps.reduce<unknown>(
    (node, step) => (node !== null && typeof node === 'object' ? (node as Record<string, unknown>)[step] : undefined),
    tree,
  );

/** Settings as given, with the model's number at every assumed path; the settings passed in are not changed. */
export function fillAssumed(given: PlantSettings, model: PlantModel, assumed: readonly string[]): PlantSettings {
  const filled = structuredClone(given);
  for (const path of assumed) {
    const steps = path.split('.');
    const last = steps.pop() ?? '';
    let node = filled as unknown as Record<string, unknown>;
    for (const step of steps) node = (node[step] ??= {}) as Record<string, unknown>;
    node[last] = at(model, modelPath(path));
  }
  return filled;
}
