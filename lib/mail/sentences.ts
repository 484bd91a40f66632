import { closeSum } from '../client/rounding';
import {
  EN_DASH,
  formatFlow,
  formatMoney,
  formatNumber,
  formatTemperature,
  MINUS,
  MISSING,
  NO_BREAK_SPACE,
  withUnit,
} from '../client/format';
import {
  addLocalDays,
  formatClock,
  formatDay,
  isRepeatedClock,
  localDay,
  startOfLocalDay,
} from '../client/format-time';
import { causeWords } from '../client/words';
import type { DailyMailModel, DayFacts } from './daily-mail-model';
import type { ReverseStretch } from './reverse-stretches';

/** The mail's sentences and figures, once for its html and its text. */

/** `9 h 45 min`, `45 min`, `9 h`. */
export function durationWords(minutes: number): string {
  const whole = Math.round(minutes);
  const parts = [Math.floor(whole / 60), whole % 60] as const;
  if (parts[0] === 0) return withUnit(String(parts[1]), 'min');
  const hours = withUnit(String(parts[0]), 'h');
  return parts[1] === 0 ? hours : `${hours}${NO_BREAK_SPACE}${withUnit(String(parts[1]), 'min')}`;
}

/** `Fri 24 Jul`. */
export const dayWords = (facts: DayFacts): string =>
  formatDay(startOfLocalDay(facts.day, facts.timeZone), facts.timeZone);

const fahrenheit = (tempF: number): string => withUnit(formatTemperature(tempF), '°F');
const gpm = (flowGpm: number): string => withUnit(formatFlow(flowGpm), 'gpm');

/** A clock time; the second run of an hour that the clocks repeat says so. */
export const clockWords = (atMs: number, timeZone: string): string =>
  `${formatClock(atMs, timeZone)}${isRepeatedClock(atMs, timeZone) ? ' (second)' : ''}`;

export const subjectOf = (model: DailyMailModel): string =>
  plain(
    `${model.plantName} ran backwards ${durationWords(model.reverseMinutes)} on ${dayWords(model)}` +
      (model.warmest ? `; supply reached ${fahrenheit(model.warmest.supplyF)}` : ''),
  );

export function preheaderOf(model: DailyMailModel): string {
  const parts = [
    model.largest
      ? `Most at ${clockWords(model.largest.atMs, model.timeZone)}: ${gpm(model.largest.flowGpm)} backward`
      : '',
    model.warmest && Number.isFinite(model.warmest.productionF)
      ? `production made ${fahrenheit(model.warmest.productionF)}`
      : '',
    `${model.lowHours} of ${model.hoursInDay} hours low`,
  ].filter((part) => part !== '');
  return plain(`${parts.join('; ')}.`);
}

/** The two short sentences that answer the question of the morning. */
export function headline(model: DailyMailModel): { ran: string; reached: string } {
  const yesterday = addLocalDays(localDay(model.evaluatedAtMs, model.timeZone), -1) === model.day;
  return {
    ran: `It ran backwards for ${durationWords(model.reverseMinutes)} ${yesterday ? 'yesterday' : `on ${dayWords(model)}`}.`,
    reached: model.warmest
      ? `Supply reached ${fahrenheit(model.warmest.supplyF)}.`
      : 'How warm the supply got is not known.',
  };
}

/** The warmest supply against what the units made at that moment; null when either is missing. */
export function againstProduction(model: DailyMailModel): string | null {
  if (!model.warmest || !Number.isFinite(model.warmest.productionF)) return null;
  const { productionF, atMs } = model.warmest;
  return `Supply was warmest at ${clockWords(atMs, model.timeZone)}, when production made ${fahrenheit(productionF)}.`;
}

export interface StretchWords {
  times: string;
  largest: string;
  warmest: string;
  /** Holds the day's largest backward flow. */
  worst: boolean;
}

export function stretchWords(model: DailyMailModel): StretchWords[] {
  const most = Math.max(
    ...model.stretches.map((each) => (Number.isNaN(each.largestFlowGpm) ? 0 : each.largestFlowGpm)),
  );
  const clock = (atMs: number) => clockWords(atMs, model.timeZone);
  return model.stretches.map((each: ReverseStretch) => ({
    times: `${clock(each.startMs)} ${EN_DASH} ${clock(each.endMs)}`,
    largest: backward(each.largestFlowGpm),
    warmest: fahrenheit(each.warmestSupplyF),
    worst: model.stretches.length > 1 && each.largestFlowGpm === most,
  }));
}

/** A positive backward amount with the bypass's own sign: `−966 gpm`; an amount that rounds to nothing has none. */
function backward(flowGpm: number): string {
  return withUnit(formatFlow(-flowGpm), 'gpm');
}

/** What the table of stretches leaves out or joins; null when it is the whole truth. */
export function stretchesNote(model: DailyMailModel): string | null {
  const notes = [
    model.further.count > 0
      ? `And ${model.further.count} shorter, ${durationWords(model.further.minutes)} in all.`
      : '',
    model.bridged ? 'Stretches less than 15 min apart are shown as one; the total counts reverse minutes only.' : '',
  ].filter((note) => note !== '');
  return notes.length === 0 ? null : notes.join(' ');
}

export interface FactWords {
  label: string;
  figure: string;
  unit: string;
}

export function factWords(model: DailyMailModel): FactWords[] {
  const cost =
    model.excessCost !== null && model.currency !== null
      ? { label: 'Excess energy cost', figure: formatMoney(model.excessCost, 'hour'), unit: model.currency }
      : { label: 'Excess energy', figure: formatNumber(model.excessEnergyKwh), unit: 'kWh' };
  return [
    { label: 'Low delta-T hours', figure: String(model.lowHours), unit: `of ${model.hoursInDay}` },
    cost.figure === MISSING ? { ...cost, unit: '' } : cost,
    { label: 'Likely cause', figure: model.cause === null ? MISSING : causeWords(model.cause), unit: '' },
    model.coverage === null
      ? { label: 'Data', figure: MISSING, unit: '' }
      : // Rounded down: 100 % is said only of a day that is whole.
        { label: 'Data', figure: String(Math.floor(model.coverage * 100 + 1e-6)), unit: '% of the day' },
  ];
}

/** What was going on when most water came back; null when it is not known. Its flows close: made less drawn is the bypass. */
export function situationWords(model: DailyMailModel): string | null {
  const { situation } = model;
  if (!situation) return null;
  const { parts } = closeSum([situation.productionFlowGpm, -situation.buildingsFlowGpm], 0, situation.bypassFlowGpm);
  const [made = NaN, drawn = NaN] = parts;
  if (!Number.isFinite(made) || !Number.isFinite(drawn)) return null;
  const at = clockWords(situation.atMs, model.timeZone);
  const flows = `made ${gpm(made)} while the buildings drew ${gpm(-drawn)}`;
  const { unitsRunning, mostUnitsRunning, units } = situation;
  if (unitsRunning === null) return `When most came back, at ${at}, the running units ${flows}.`;
  const running =
    unitsRunning === units
      ? units === 1
        ? 'the one unit'
        : `all ${units} units`
      : `${unitsRunning} of ${units} units`;
  const more =
    mostUnitsRunning !== null && unitsRunning === mostUnitsRunning && mostUnitsRunning < units
      ? ` Never more than ${mostUnitsRunning} ran at once that day.`
      : '';
  return `When most came back, at ${at}, ${running} ran and ${flows}.${more}`;
}

export const CAUTION_WORDS =
  'For review by the plant’s operator and a licensed engineer; the maker’s limits, warranty and local code govern. Slackwater reads; it writes to no control system.';

/** The caution, led by the interval of the number it is most needed for. */
export function cautionWords(model: DailyMailModel): string {
  const { largest } = model;
  if (!largest || !Number.isFinite(largest.loGpm) || !Number.isFinite(largest.hiGpm))
    return `An estimate with uncertainty. ${CAUTION_WORDS}`;
  const from = largest.loGpm < 0 ? `${formatFlow(-largest.loGpm)} forward` : formatFlow(largest.loGpm);
  return `An estimate with uncertainty: the ${gpm(largest.flowGpm)} backward lies between ${from} and ${formatFlow(largest.hiGpm)} (90${NO_BREAK_SPACE}% interval). ${CAUTION_WORDS}`;
}

export function ruleWords(model: DailyMailModel): string {
  const { minReverseMinutes, minReverseFlowGpm } = model.rule;
  const flow = minReverseFlowGpm > 0 ? ` and reached ${gpm(minReverseFlowGpm)}` : '';
  return `You get this as an operator of ${model.organizationName}, by the rule “ran backwards ${durationWords(minReverseMinutes)} or more${flow}”.`;
}

/** The same words in characters every text mail can carry; one line, since a subject must not break. */
export const plain = (words: string): string =>
  words
    .replaceAll(MINUS, '-')
    .replaceAll(EN_DASH, '-')
    .replaceAll(`${NO_BREAK_SPACE}°F`, ' F')
    .replace(/[‘’]/g, "'")
    .replace(/[“”]/g, '"')
    .replace(/\p{Cc}+/gu, ' ')
    .replace(/\s+/gu, ' ')
    .trim();
