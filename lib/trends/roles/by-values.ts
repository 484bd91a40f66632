import { TREND_UNITS } from '../../units';
import type { PreviewOptions } from '../types';
import { says, type Draft } from './draft';
import { number } from './quantity';
import { stepSize } from './statistics';

/** Chilled water, in F: nothing in the plant is colder, and little of it warmer while it runs. */
const CHILLED_F: readonly [low: number, high: number] = [34, 75];
/** A sensor in the common pipe reads production water or return water, so it lies near either for most of the time. */
const NEAR_F = 1.2;
const NEAR_SHARE = 0.8;

const CONFIDENCE = { bypass: 0.35, temperature: 0.3, flow: 0.4, status: 0.35, unknown: 0.2 } as const;

/** A guess for a column whose name gives no role; always left to a person. */
export function roleByValues(draft: Draft, drafts: readonly Draft[], options: PreviewOptions): void {
  const range = `Between ${number(draft.statistics.low)} and ${number(draft.statistics.high)}`;
  draft.confidence = CONFIDENCE.unknown;
  draft.unitClause = '';
  if (draft.quantity === null && inChilledRange(draft)) Object.assign(draft, { quantity: 'temperature', unit: 'degF' });
  if (draft.quantity === 'temperature' && !says(draft, 'setpoint', 'outdoor', 'air'))
    return guessWater(draft, drafts, range);
  if (draft.quantity === 'flow') return guessFlow(draft, range, options);
  if (draft.quantity === 'status' && options.unitCount > 0) {
    draft.confidence = CONFIDENCE.status;
    draft.shown.push('0 and 1 only; the name does not say of what');
  } else draft.shown.push(`${range}; neither name nor values tell what this is`);
  draft.unit = null;
}

/** Only when no other unit fits: whole numbers and wide swings are something else. */
function inChilledRange({ statistics }: Draft): boolean {
  return statistics.p05 >= CHILLED_F[0] && statistics.p95 <= CHILLED_F[1] && !statistics.whole;
}

function guessWater(draft: Draft, drafts: readonly Draft[], range: string): void {
  const near = (role: string) =>
    drafts
      .filter((each) => each.role === role && each !== draft)
      .map((each) => ({ each, values: each.statistics.values }));
  const supplies = near('primarySupplyTemp');
  const returns = near('secondaryReturnTemp');
  draft.confidence = CONFIDENCE.temperature;
  if (supplies.length === 0 || returns.length === 0) {
    draft.shown.push(`${range} and nothing in the name says where; choose a role`);
    draft.unit = null;
    return;
  }
  let atSupply = 0;
  let atReturn = 0;
  let rows = 0;
  const asF = (from: Draft, value: number) => TREND_UNITS[from.unit ?? 'degF'].toStored(value);
  draft.statistics.values.forEach((value, i) => {
    const here = asF(draft, value);
    if (Number.isNaN(here)) return;
    rows++;
    if (supplies.some(({ each, values }) => Math.abs(asF(each, values[i]!) - here) < NEAR_F)) atSupply++;
    else if (returns.some(({ each, values }) => Math.abs(asF(each, values[i]!) - here) < NEAR_F)) atReturn++;
  });
  const both = atSupply > rows * 0.05 && atReturn > rows * 0.05 && atSupply + atReturn > rows * NEAR_SHARE;
  if (both) {
    draft.role = 'bypassTemp';
    draft.confidence = CONFIDENCE.bypass;
    draft.shown.push(`${range}, now near the primary supply, now near the return: bypass temperature?`);
    return;
  }
  draft.shown.push(`${range}, follows nothing for long; choose a role`);
  draft.unit = null;
}

function guessFlow(draft: Draft, range: string, options: PreviewOptions): void {
  draft.confidence = CONFIDENCE.flow;
  const oneUnit = options.unitFlowGpm ? options.unitFlowGpm / TREND_UNITS[draft.unit ?? 'gpm'].toStored(1) : Number.NaN;
  const steps = stepSize(draft.statistics.values, oneUnit);
  if (Math.abs(steps - oneUnit) < oneUnit * 0.25) {
    draft.role = 'primaryFlow';
    draft.shown.push(`Takes steps of ${number(steps)}, about one unit's design flow: primary flow?`);
    return;
  }
  draft.shown.push(`${range} and nothing in the name says where; choose a role`);
  draft.unit = null;
}
