import type { BoundFormat } from '@/components/shell/units-context';
import type { HourDetail } from '@/lib/schemas/results';

/** The hour's finding: direction, amount with its interval, and what the buildings were sent. */
export function hourLead(detail: HourDetail, print: BoundFormat): string {
  const { hour, direction, bypassFlowGpm, bypassFlowLoGpm, bypassFlowHiGpm } = detail;
  const supply =
    hour.blendedSupplyF === null
      ? ''
      : ` Buildings were sent ${print.with(print.temperature(hour.blendedSupplyF), 'temperature')}.`;
  const amount = (flow: number | null, lo: number | null, hi: number | null) =>
    `${print.with(print.flow(flow === null ? null : Math.abs(flow)), 'flow')}${lo === null || hi === null ? '' : ` (${print.interval(lo, hi, 'flow')})`}`;
  switch (direction) {
    case 'reverse': {
      const made = detail.stations.find((station) => station.station === 'production-supply')?.reconciledTempF ?? null;
      const sent =
        hour.blendedSupplyF === null || made === null
          ? supply
          : ` Buildings were sent ${print.with(print.temperature(hour.blendedSupplyF), 'temperature')}; production made ${print.temperature(made)}.`;
      // Backward flow is a positive amount: the bounds change places with the sign.
      const lo = bypassFlowHiGpm === null ? null : Math.max(0, -bypassFlowHiGpm);
      const hi = bypassFlowLoGpm === null ? null : -bypassFlowLoGpm;
      return `Reverse: ${amount(bypassFlowGpm, lo, hi)} of return water came back through the common pipe.${sent}`;
    }
    case 'forward': {
      const lo = bypassFlowLoGpm === null ? null : Math.max(0, bypassFlowLoGpm);
      return `Forward: ${amount(bypassFlowGpm, lo, bypassFlowHiGpm)} of supply water crossed over to the return.${supply}`;
    }
    case 'still':
      return `At slack: as much water was made as was drawn, and nothing to speak of flowed through the common pipe.${supply}`;
    default:
      return `The direction is not known in this hour: the bypass flow lies within ${print.bypassInterval(bypassFlowLoGpm, bypassFlowHiGpm)} ${print.unit('flow')}.`;
  }
}
