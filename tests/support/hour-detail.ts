import type { HourDetail } from '@/lib/schemas/results';
import { hourRow } from './tide-bars';

type Station = HourDetail['stations'][number];

const station = (
  name: Station['station'],
  tempF: number,
  flowGpm: number | null,
  given: Partial<Station> = {},
): Station => ({
  station: name,
  measuredTempF: null,
  reconciledTempF: tempF,
  tempPlusMinusF: 0.2,
  measuredFlowGpm: null,
  reconciledFlowGpm: flowGpm,
  flowLoGpm: flowGpm === null ? null : flowGpm - 40,
  flowHiGpm: flowGpm === null ? null : flowGpm + 40,
  ...given,
});

/** An hour of clear reverse flow: 1,720 made, 2,686 drawn, 966 of return water in the supply. */
export const reverseHour = (given: Partial<HourDetail> = {}): HourDetail => ({
  hour: hourRow('2026-07-24T19:00:00Z', { loadTons: 977, cause: 'reverse-flow' }),
  direction: 'reverse',
  reverseProbability: 0.999,
  bypassFlowGpm: -966,
  bypassFlowLoGpm: -1059,
  bypassFlowHiGpm: -872,
  steadyIntervals: 11,
  intervals: 12,
  unitsRunning: 2,
  stations: [
    station('production-supply', 44.2, 1720, { measuredTempF: 44.1, measuredFlowGpm: 1684 }),
    station('supply-to-buildings', 49.1, 2686, { measuredTempF: 49.7, measuredFlowGpm: 2671 }),
    station('return-from-buildings', 57.8, 2686, { measuredTempF: 57.9 }),
    station('return-to-production', 57.8, 1720, { measuredTempF: 57.7 }),
    station('common-pipe', 57.8, -966, { flowLoGpm: -1059, flowHiGpm: -872 }),
  ],
  ledger: { loadF: 8.7, blendF: 4.9, dilutionF: 0, productionF: 13.6 },
  evidence: [],
  rank: 4,
  rankOf: 201,
  before: null,
  after: null,
  settingsRevision: 7,
  calibrationId: 3,
  kernelVersion: '0.1.0',
  ...given,
});
