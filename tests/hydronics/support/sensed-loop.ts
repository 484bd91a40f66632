import { normal } from '@/fixtures/demo/noise';
import { recordOf } from './plants';

export const STEP = 5;
export const DAY = 288;

export type Loop = Record<
  'primarySupplyF' | 'primaryReturnF' | 'secondarySupplyF' | 'secondaryReturnF' | 'primaryFlowGpm' | 'secondaryFlowGpm',
  number[]
>;
const rounded = (value: number, step: number) => (step > 0 ? Math.round(value / step) * step : value);

/**
 * A loop of two units over some days: load swings by day, one unit at night and two by day, forward by night and reverse at
 * the peak; noise of 0.1 F and 1 %. `dutyHours` switches it off outside; `resolutionF` is the temperatures' step.
 */
export function loopOf(count: number, { resolutionF = 0.01, dutyHours = [0, 24] as [number, number] } = {}) {
  const n = count * DAY;
  const loop: Loop = {
    primarySupplyF: [],
    primaryReturnF: [],
    secondarySupplyF: [],
    secondaryReturnF: [],
    primaryFlowGpm: [],
    secondaryFlowGpm: [],
  };
  const status: number[][] = [[], []];
  for (let slot = 0; slot < n; slot += 1) {
    const hour = ((slot % DAY) * STEP) / 60;
    const swing = 0.5 - 0.5 * Math.cos((2 * Math.PI * (hour - 3)) / 24) + 0.1 * Math.sin(slot / 40);
    const units = hour >= 8 && hour < 20 ? 2 : 1;
    const on = hour >= dutyHours[0] && hour < dutyHours[1];
    const primary = on ? 900 * units : 0;
    const secondary = on ? 500 + 1500 * swing : 0;
    const supply = on ? 44 + 0.4 * Math.sin(slot / 17) : 58 - hour / 24;
    const back = on ? 53 + 4 * swing : 58;
    const blended = secondary > primary ? (primary * supply + (secondary - primary) * back) / secondary : supply;
    const mixed = primary > secondary ? (secondary * back + (primary - secondary) * supply) / primary : back;
    const temp = (value: number, seed: number) => rounded(value + 0.1 * normal(seed, slot), resolutionF);
    loop.primarySupplyF.push(temp(supply, 1));
    loop.primaryReturnF.push(temp(mixed, 2));
    loop.secondarySupplyF.push(temp(blended, 3));
    loop.secondaryReturnF.push(temp(back, 4));
    loop.primaryFlowGpm.push(primary * (1 + 0.01 * normal(5, slot)));
    loop.secondaryFlowGpm.push(secondary * (1 + 0.01 * normal(6, slot)));
    status[0]?.push(on ? 1 : 0);
    status[1]?.push(on && units === 2 ? 1 : 0);
  }
  return { n, loop, record: () => recordOf(n, STEP, loop, { unitStatus: status }) };
}
