import type { z } from 'zod';
import type { Station } from '../schemas/results';
import { figure } from './figures';
import { NINETY_PERCENT, type HourFacts } from './hour-facts';

type StationRecord = z.infer<typeof Station>;

const reachF = (measuredF: number, sigmaF: number): number => (Number.isNaN(measuredF) ? NaN : NINETY_PERCENT * sigmaF);

/**
 * The five stations of the tee sheet: what was measured beside what was worked out. A flow is measured on the supply side only;
 * the same water returns. The common pipe carries the temperature of where its water comes from.
 */
export function hourStations({ measured, workedOut, plant }: HourFacts): StationRecord[] {
  const { sigma } = plant;
  const bypass = workedOut.bypassFlowGpm;
  const blended = workedOut.blendedSupplyF;
  const station = (
    name: StationRecord['station'],
    temperature: { measuredF: number; reconciledF: number; plusMinusF: number },
    flow: { measuredGpm: number; reconciledGpm: number; loGpm: number; hiGpm: number },
  ): StationRecord => ({
    station: name,
    measuredTempF: figure(temperature.measuredF),
    reconciledTempF: figure(temperature.reconciledF),
    tempPlusMinusF: figure(temperature.plusMinusF),
    measuredFlowGpm: figure(flow.measuredGpm),
    reconciledFlowGpm: figure(flow.reconciledGpm),
    flowLoGpm: figure(flow.loGpm),
    flowHiGpm: figure(flow.hiGpm),
  });
  const flowOf = (measuredGpm: number, reconciledGpm: number, sigmaPercent: number) => {
    // A flow nobody measured has no meter's interval either.
    const reach = Number.isNaN(measuredGpm) ? NaN : (NINETY_PERCENT * reconciledGpm * sigmaPercent) / 100;
    return { reconciledGpm, loGpm: reconciledGpm - reach, hiGpm: reconciledGpm + reach };
  };
  const production = flowOf(measured.primaryFlowGpm, workedOut.primaryFlowGpm, sigma.primaryFlowPercent);
  const distribution = flowOf(measured.secondaryFlowGpm, workedOut.secondaryFlowGpm, sigma.secondaryFlowPercent);
  return [
    station(
      'production-supply',
      {
        measuredF: measured.primarySupplyF,
        reconciledF: workedOut.primarySupplyF,
        plusMinusF: reachF(measured.primarySupplyF, sigma.primarySupplyF),
      },
      { measuredGpm: measured.primaryFlowGpm, ...production },
    ),
    station(
      'supply-to-buildings',
      {
        measuredF: measured.secondarySupplyF,
        reconciledF: blended.mean,
        plusMinusF: (blended.hi - blended.lo) / 2,
      },
      { measuredGpm: measured.secondaryFlowGpm, ...distribution },
    ),
    station(
      'return-from-buildings',
      {
        measuredF: measured.secondaryReturnF,
        reconciledF: workedOut.secondaryReturnF,
        plusMinusF: reachF(measured.secondaryReturnF, sigma.secondaryReturnF),
      },
      { measuredGpm: NaN, ...distribution },
    ),
    station(
      'return-to-production',
      {
        measuredF: measured.primaryReturnF,
        reconciledF: workedOut.primaryReturnF,
        plusMinusF: reachF(measured.primaryReturnF, sigma.primaryReturnF),
      },
      { measuredGpm: NaN, ...production },
    ),
    station(
      'common-pipe',
      { measuredF: measured.bypassF, ...commonPipeTemperature({ measured, workedOut, plant }) },
      {
        measuredGpm: measured.bypassFlowGpm,
        reconciledGpm: bypass.mean,
        loGpm: bypass.lo,
        hiGpm: bypass.hi,
      },
    ),
  ];
}

function commonPipeTemperature({ measured, workedOut, plant }: Pick<HourFacts, 'measured' | 'workedOut' | 'plant'>): {
  reconciledF: number;
  plusMinusF: number;
} {
  if (workedOut.direction === 'reverse') {
    return {
      reconciledF: workedOut.secondaryReturnF,
      plusMinusF: reachF(measured.secondaryReturnF, plant.sigma.secondaryReturnF),
    };
  }
  if (workedOut.direction === 'forward') {
    return {
      reconciledF: workedOut.primarySupplyF,
      plusMinusF: reachF(measured.primarySupplyF, plant.sigma.primarySupplyF),
    };
  }
  return { reconciledF: NaN, plusMinusF: NaN };
}
