/**
 * Estimates a year of one-minute intervals with its whole-record calibration beside the plain textbook formula on the same
 * arrays, sums its hours, days and episodes, and prints seconds, intervals a second and peak memory.
 *
 *   node --import tsx tests/bench/estimate-year.bench.ts
 */
import { calibrateRecord } from '../../lib/hydronics/calibrate';
import { summariseDay } from '../../lib/hydronics/days';
import { findEpisodes } from '../../lib/hydronics/episodes';
import { estimateIntervals } from '../../lib/hydronics/estimate';
import { summariseHours } from '../../lib/hydronics/hours';
import { decouplerBalance } from '../../lib/hydronics/tees';
import type { Measurements } from '../../lib/hydronics/types';
import { plantOf, WATER } from '../hydronics/support/plants';
import { textbookBypass } from '../support/simulation/textbook';

const MINUTES = 525_600;
const ROUNDS = 3;
const plant = plantOf();

/** Deterministic noise: a linear congruential generator and the polar form of a normal. */
function noiseSource(seed: number): () => number {
  let state = seed;
  const uniform = () => {
    state = (state * 1_664_525 + 1_013_904_223) >>> 0;
    return (state + 0.5) / 2 ** 32;
  };
  return () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}

/** Two units staged over a daily swing of load: about a quarter of the minutes run backwards. */
function yearOfMinutes(): Measurements {
  const noise = noiseSource(7);
  const channel = () => new Float64Array(MINUTES);
  const year = {
    n: MINUTES,
    stepMinutes: 1,
    primarySupplyF: channel(),
    primaryReturnF: channel(),
    secondarySupplyF: channel(),
    secondaryReturnF: channel(),
    primaryFlowGpm: channel(),
    secondaryFlowGpm: channel(),
    unitStatus: [channel(), channel()] as const,
    unitPowerKw: [channel(), channel()] as const,
    unitFlowGpm: [],
    unitLeavingF: [],
    unitEnteringF: [],
    primaryPumpStatus: [],
  };
  for (let minute = 0; minute < MINUTES; minute += 1) {
    const swing = Math.sin((2 * Math.PI * minute) / 1440);
    const second = swing > 0.3 ? 1 : 0;
    const primaryGpm = 900 * (1 + second);
    const secondaryGpm = 1100 + 700 * swing;
    const returnF = 56 - 2 * swing;
    const tees = decouplerBalance(primaryGpm, secondaryGpm, 44, returnF, WATER);
    year.primarySupplyF[minute] = 44 + 0.2 * noise();
    year.primaryReturnF[minute] = tees.primaryReturnF + 0.2 * noise();
    year.secondarySupplyF[minute] = tees.secondarySupplyF + 0.2 * noise();
    year.secondaryReturnF[minute] = returnF + 0.2 * noise();
    year.primaryFlowGpm[minute] = primaryGpm * (1 + 0.01 * noise());
    year.secondaryFlowGpm[minute] = secondaryGpm * (1 + 0.01 * noise());
    year.unitStatus[0][minute] = 1;
    year.unitStatus[1][minute] = second;
    year.unitPowerKw[0][minute] = 220;
    year.unitPowerKw[1][minute] = 220 * second;
  }
  return year;
}

/** Wall and processor seconds of a piece of work: on a shared machine only the second says what the code costs. */
function timed<Result>(label: string, work: () => Result): Result {
  const wall = performance.now();
  const before = process.cpuUsage();
  const result = work();
  const cpu = process.cpuUsage(before);
  const seconds = (performance.now() - wall) / 1000;
  const processor = (cpu.user + cpu.system) / 1e6;
  const rate = MINUTES / processor / 1e6;
  process.stdout.write(
    `${label.padEnd(28)} ${seconds.toFixed(2)} s wall, ${processor.toFixed(2)} s processor, ${rate.toFixed(2)} million intervals a second\n`,
  );
  return result;
}

const year = yearOfMinutes();
const starts = Array.from({ length: MINUTES / 60 }, (_, hour) => hour * 3_600_000);
for (let round = 1; round <= ROUNDS; round += 1) {
  timed(`${round}: textbook formula`, () => textbookBypass(year, plant));
  const calibration = timed(`${round}: calibration`, () => calibrateRecord(year, plant));
  const estimates = timed(`${round}: ${MINUTES} intervals`, () => estimateIntervals(year, plant, calibration));
  const hours = timed(`${round}: ${starts.length} hours`, () =>
    summariseHours(estimates, year, plant, { startMs: 0, stepMinutes: 1 }, starts),
  );
  timed(`${round}: days and episodes`, () => {
    for (let day = 0; day < 365; day += 1) summariseDay(hours.slice(24 * day, 24 * day + 24));
    findEpisodes(hours);
  });
}
process.stdout.write(`peak resident ${(process.resourceUsage().maxRSS / 1024).toFixed(0)} MB\n`);
