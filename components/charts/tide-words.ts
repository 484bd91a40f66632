import type { BoundFormat } from '@/components/shell/units-context';
import { formatHoursMinutes, formatPercent } from '@/lib/client/format';
import { formatDayTime, formatPeriod } from '@/lib/client/format-time';
import type { Tide, TideBar } from '@/lib/schemas/results';
import { directionOf, type TideMark } from './tide-marks';

/** The bar where most water came back; null when none did. */
export function deepestReverse(marks: readonly TideMark[]): TideMark | null {
  let deepest: TideMark | null = null;
  for (const mark of marks) if (mark.reverseGpm < (deepest?.reverseGpm ?? 0)) deepest = mark;
  return deepest;
}

/** The strip in a sentence: what it is, how long it ran backward, and the extreme. */
export function stripSentence(tide: Tide, marks: readonly TideMark[], timeZone: string, print: BoundFormat): string {
  const period = formatPeriod(Date.parse(tide.from), Date.parse(tide.to), timeZone);
  const minutes = (name: 'reverseMinutes' | 'unknownMinutes') => tide.bars.reduce((sum, bar) => sum + bar[name], 0);
  const deepest = deepestReverse(marks);
  const extreme =
    deepest === null
      ? 'no bar ran backward'
      : `largest ${print.with(print.bypass(deepest.reverseGpm), 'flow')} at ${formatDayTime(deepest.startMs, timeZone)}`;
  const unknown = minutes('unknownMinutes');
  const unsure = unknown === 0 ? '' : `; direction unknown for ${formatHoursMinutes(unknown)} hours`;
  return `Bypass flow around the still line, ${period}: reverse for ${formatHoursMinutes(minutes('reverseMinutes'))} hours, ${extreme}${unsure}.`;
}

/** One bar in words, for the live region. */
export function barSentence(bar: TideBar, timeZone: string, print: BoundFormat): string {
  const direction = directionOf(bar);
  const when = formatDayTime(bar.t, timeZone);
  if (direction === null) return `${when}, no data`;
  const interval = print.bypassInterval(bar.bypassFlowLoGpm, bar.bypassFlowHiGpm);
  const supply =
    bar.blendedSupplyF === null ? '' : `, supply ${print.with(print.temperature(bar.blendedSupplyF), 'temperature')}`;
  if (direction === 'unknown') {
    return `${when}, direction unknown${interval === '-' ? '' : `, from ${interval} ${print.unit('flow')}`}${supply}`;
  }
  // Never rounded up to certainty.
  const sure =
    bar.probability === null ? '' : `, probability ${formatPercent(Math.min(0.99, bar.probability))} percent`;
  return `${when}, ${direction}, ${print.bypass(bar.bypassFlowGpm)} ${print.unit('flow')}${sure}${supply}`;
}
