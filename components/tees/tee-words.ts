import type { BoundFormat } from '@/components/shell/units-context';
import { formatPercent, MISSING } from '@/lib/client/format';
import type { HourDetail } from '@/lib/schemas/results';
import type { TeeFlows } from './tee-geometry';

export type StationRecord = HourDetail['stations'][number];
export type StationName = StationRecord['station'];

/** A measurement that lies more than two standard uncertainties of the adjustment from what was worked out. */
export interface Doubt {
  station: StationName;
  quantity: 'temperature' | 'flow';
}

/** The order and the numbers of the stations: round the loop, the pipe last. */
export const STATIONS: readonly { station: StationName; number: number; label: string }[] = [
  { station: 'production-supply', number: 1, label: 'Production supply' },
  { station: 'supply-to-buildings', number: 2, label: 'Supply to buildings' },
  { station: 'return-from-buildings', number: 3, label: 'Return from buildings' },
  { station: 'return-to-production', number: 4, label: 'Return to production' },
  { station: 'common-pipe', number: 5, label: 'Common pipe' },
];

export const stationOf = (detail: HourDetail, station: StationName): StationRecord | undefined =>
  detail.stations.find((one) => one.station === station);

/** Flows of the hour for the drawing, as reconciled or as the meters said. */
export function teeFlows(detail: HourDetail, widths: 'reconciled' | 'measured'): TeeFlows {
  const flow = (station: StationName) =>
    (widths === 'measured' ? stationOf(detail, station)?.measuredFlowGpm : null) ??
    stationOf(detail, station)?.reconciledFlowGpm ??
    null;
  return {
    direction: detail.direction,
    productionGpm: flow('production-supply') ?? flow('return-to-production'),
    distributionGpm: flow('supply-to-buildings') ?? flow('return-from-buildings'),
    bypassGpm: detail.bypassFlowGpm,
    bypassLoGpm: detail.bypassFlowLoGpm,
    bypassHiGpm: detail.bypassFlowHiGpm,
  };
}

export interface StationFigures {
  measuredTemp: string;
  reconciledTemp: string;
  tempInterval: string;
  measuredFlow: string;
  reconciledFlow: string;
  flowInterval: string;
}

/** How far from the middle the value may lie, as a share of the interval, for a plus-minus to be honest. */
const SYMMETRY = 0.06;

/** The printed figures of a station. The common pipe's flow carries its sign and its interval in full. */
export function stationFigures(
  record: StationRecord | undefined,
  signed: boolean,
  print: BoundFormat,
  interval: 'in full' | 'short' = signed ? 'in full' : 'short',
): StationFigures {
  const flow = signed ? print.bypass : print.flow;
  return {
    measuredTemp: print.temperature(record?.measuredTempF),
    reconciledTemp: print.temperature(record?.reconciledTempF),
    tempInterval: print.plusMinus(record?.tempPlusMinusF, 'temperature'),
    measuredFlow: flow(record?.measuredFlowGpm),
    reconciledFlow: flow(record?.reconciledFlowGpm),
    flowInterval: flowInterval(record, signed, interval, print),
  };
}

function flowInterval(
  record: StationRecord | undefined,
  signed: boolean,
  form: 'in full' | 'short',
  print: BoundFormat,
): string {
  const lo = record?.flowLoGpm ?? null;
  const hi = record?.flowHiGpm ?? null;
  const value = record?.reconciledFlowGpm ?? null;
  if (lo === null || hi === null) return '';
  if (form === 'short' && value !== null && Math.abs((lo + hi) / 2 - value) <= SYMMETRY * (hi - lo)) {
    return print.plusMinus((hi - lo) / 2, 'flow');
  }
  const text = signed ? print.bypassInterval(lo, hi) : print.interval(lo, hi, 'flow');
  return text === MISSING ? '' : text;
}

/** What the crossing water makes of the band it joins, in a sentence. */
export function crossingSentence(direction: HourDetail['direction'], share: number | null): string | null {
  if (share === null) return null;
  const percent = `${formatPercent(share)}\u00a0%`;
  if (direction === 'reverse') return `${percent} of this supply is return water`;
  if (direction === 'forward') return `${percent} of this return is supply water`;
  return null;
}

/** The drawing in a sentence. */
export function teeSentence(detail: HourDetail, share: number | null, print: BoundFormat): string {
  const flow = print.with(print.bypass(detail.bypassFlowGpm), 'flow');
  const interval = print.bypassInterval(detail.bypassFlowLoGpm, detail.bypassFlowHiGpm);
  const between = interval === MISSING ? '' : ` (${interval})`;
  const made = crossingSentence(detail.direction, share);
  switch (detail.direction) {
    case 'reverse':
      return `Tee sheet. Reverse: ${flow}${between}; return water rises through the common pipe${made === null ? '' : `; ${made}`}.`;
    case 'forward':
      return `Tee sheet. Forward: ${flow}${between}; production water crosses down through the common pipe${made === null ? '' : `; ${made}`}.`;
    case 'still':
      return `Tee sheet. Still: ${flow}${between}; nothing to speak of flows in the common pipe.`;
    default:
      return `Tee sheet. Direction unknown${interval === MISSING ? '' : `: from ${interval} ${print.unit('flow')}`}; no sign is given.`;
  }
}

/** A station in a sentence, for whoever tabs to it. */
export function stationSentence(label: string, figures: StationFigures, print: BoundFormat): string {
  const part = (measured: string, reconciled: string, interval: string, quantity: 'temperature' | 'flow') =>
    `measured ${measured === MISSING ? 'none' : print.with(measured, quantity)}, reconciled ${reconciled === MISSING ? 'none' : print.with(reconciled, quantity)} ${interval}`.trim();
  return `${label}: ${part(figures.measuredTemp, figures.reconciledTemp, figures.tempInterval, 'temperature')}; ${part(figures.measuredFlow, figures.reconciledFlow, figures.flowInterval, 'flow')}`;
}
