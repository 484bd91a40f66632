/**
 * Estimates the fleet of simulated plants and prints every measure of accuracy beside its floor.
 *
 *   node --import tsx tests/bench/accuracy.bench.ts [--plants] [--only <text in the plant's name>] [--fleet <number>] [--perfect]
 *
 * --plants   a line for each plant
 * --fleet    other seeds: what was tuned on fleet 0 is tried on fleet 1, 2, ...
 * --perfect  the same plants with sensors that have noise but no lasting error: what is left then is not calibration's
 */
import { calibrateRecord } from '../../lib/hydronics/calibrate';
import { estimateIntervals } from '../../lib/hydronics/estimate';
import { inspectSensors, withoutStretches } from '../../lib/hydronics/sensor-stretches';
import { fleetOptions } from '../support/simulation/fleet';
import { FLOORS_ALL, FLOORS_BY_SENSING, FLOORS_NEAR_BALANCE, keeps } from '../support/simulation/floors';
import type { Limit } from '../support/simulation/floors';
import { nearBalance, poolScores, scorePlant } from '../support/simulation/score';
import type { PlantScore, PooledScore } from '../support/simulation/score';
import { simulatePlant } from '../support/simulation/simulate';
import type { Sensing, SimulatedPlant } from '../support/simulation/types';

const SENSINGS: readonly Sensing[] = ['both-meters', 'pump-status', 'one-meter', 'temperatures'];
const NUMBER_WIDTH = 8;

/** The kernel under test: the one place that says how it is called. */
function scoreKernel(sim: SimulatedPlant): PlantScore {
  const measurements = withoutStretches(sim.measurements, inspectSensors(sim.measurements, sim.plant).stretches);
  const calibration = calibrateRecord(measurements, sim.plant);
  return scorePlant(sim, estimateIntervals(measurements, sim.plant, calibration), calibration);
}

const write = (line: string) => process.stdout.write(`${line}\n`);
const number = (value: number) => (Number.isFinite(value) ? value.toFixed(4) : '-').padStart(NUMBER_WIDTH);

function bound(limit: Limit): string {
  const least = limit.atLeast === undefined ? '' : `>= ${limit.atLeast}`;
  const most = limit.atMost === undefined ? '' : `<= ${limit.atMost}`;
  return `${least} ${most}`.trim();
}

/** One group's table; a star marks what falls short. */
function printGroup(title: string, pooled: PooledScore, limits: readonly Limit[]): void {
  write(`\n${title}: ${pooled.plants} plants, ${pooled.tally.running} running intervals`);
  for (const limit of limits) {
    const { measure } = limit;
    const value = measure === 'worst5' || measure === 'worstRatio' ? pooled[measure] : pooled.measures[measure];
    if (Number.isNaN(value)) continue;
    write(`  ${keeps(limit, value) ? ' ' : '*'} ${limit.label.padEnd(38)} ${number(value)}   ${bound(limit)}`);
  }
}

const PLANT_COLUMNS = [
  ['directed', 'given'],
  ['directionRight', 'right'],
  ['directionRight5', '>5 %'],
  ['falseReverse', 'false'],
  ['missedReverse', 'missed'],
  ['brier', 'Brier'],
  ['rmseRatio', 'ratio'],
  ['bypassRmseShare', 'rmse b'],
  ['blendRmseF', 'blend F'],
  ['bypassCoverage', 'cover b'],
  ['blendCoverage', 'cover F'],
  ['offsetRmsF', 'offset'],
  ['gainRatioPercent', 'gain %'],
] as const;

function printPlants(scores: readonly PlantScore[]): void {
  const heads = PLANT_COLUMNS.map(([, head]) => head.padStart(NUMBER_WIDTH)).join(' ');
  write(`\n${'plant'.padEnd(34)} ${heads}`);
  for (const score of scores) {
    const values = PLANT_COLUMNS.map(([measure]) => number(score.measures[measure])).join(' ');
    write(`${score.name.padEnd(34)} ${values}${score.unit === 'share' ? '  share' : ''}`);
  }
}

/** The word after an option on the command line. */
function optionValue(name: string): string {
  const index = process.argv.indexOf(name);
  return index < 0 ? '' : (process.argv[index + 1] ?? '');
}

const only = optionValue('--only');
const perfect = process.argv.includes('--perfect')
  ? { offsetF: 0, gainPercent: 0, flowZeroPercent: 0, ratedFlowPercent: 0, spikes: false }
  : {};
const scores: PlantScore[] = [];
let estimateMs = 0;
for (const options of fleetOptions(Number(optionValue('--fleet')))) {
  const sim = simulatePlant({ ...options, ...perfect });
  if (!sim.name.includes(only)) continue;
  const started = performance.now();
  scores.push(scoreKernel(sim));
  estimateMs += performance.now() - started;
}
if (process.argv.includes('--plants')) printPlants(scores);
printGroup('all', poolScores(scores), FLOORS_ALL);
const near = scores.filter(nearBalance);
if (near.length > 0) printGroup('near balance', poolScores(near), FLOORS_NEAR_BALANCE);
printGroup('away from balance', poolScores(scores.filter((score) => !nearBalance(score))), FLOORS_ALL);
for (const sensing of SENSINGS) {
  const group = scores.filter((score) => score.group.sensing === sensing);
  if (group.length > 0) printGroup(sensing, poolScores(group), FLOORS_BY_SENSING[sensing]);
}
write(`\nestimated and scored in ${(estimateMs / 1000).toFixed(1)} s`);
