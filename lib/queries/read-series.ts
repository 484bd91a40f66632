import type { EntityManager } from '@mikro-orm/postgresql';
import type { Series } from '../schemas/results';
import { barAtLeast, barEdges } from './bars';
import { figure } from './figures';
import { HOUR_MS, MINUTE_MS, zoneOffsetMs } from './local-time';
import { apiInstant, type PeriodMs } from './period';
import { resultSlices } from './result-slices';
import { SeriesBars } from './series-bars';
import { addSamples } from './series-samples';
import { seriesSources, storedUnitLabel, type SeriesSource } from './series-points';

type ChannelSource = Extract<SeriesSource, { kind: 'channel' }>;

/**
 * Chart data: each named point thinned to at most `width` bars, with the least, mean and greatest value in each, missing as null.
 * Bars follow the plant's clock. From an hour a bar on they are made from the hourly bands, without opening the day blocks.
 */
export async function readSeries(
  em: EntityManager,
  plant: { id: string; organizationId: string; timeZone: string; stepMinutes: number },
  period: PeriodMs,
  asked: { points: string; width: number },
): Promise<{ series: Series; sources: SeriesSource[] }> {
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  const sources = await seriesSources(em, owner, asked.points);
  const minutesAPixel = (period.toMs - period.fromMs) / MINUTE_MS / asked.width;
  const barMinutes = barAtLeast(Math.max(plant.stepMinutes, minutesAPixel), plant.stepMinutes);
  const edges = barEdges(period, barMinutes, plant.timeZone);
  const bars = new Map(sources.map((source) => [source.point, new SeriesBars(edges, period)]));
  const roles = sources.filter((source) => source.kind === 'role');
  const channels = sources.filter((source) => source.kind === 'channel');
  const bands = barMinutes >= 60 && bandsFit(period, barMinutes, plant.timeZone);
  await addSamples(em, { ...owner, period, stepMinutes: plant.stepMinutes, bands }, roles, bars);
  await addResults(em, owner, period, channels, bars);
  return {
    sources,
    series: {
      from: apiInstant(period.fromMs),
      to: apiInstant(period.toMs),
      stepMinutes: barMinutes,
      times: edges.slice(0, -1),
      series: sources.map((source) => {
        const { lo, mean, hi } = bars.get(source.point)?.finish() ?? new SeriesBars(edges, period).finish();
        const { point, label } = source;
        return { point, label, unit: storedUnitLabel(source), lo: list(lo), mean: list(mean), hi: list(hi) };
      }),
    },
  };
}

const list = (values: Float64Array): (number | null)[] => Array.from(values, figure);

/** Bands are of UTC hours: in a zone of half hours a bar of one or two hours would take half of its neighbour's. */
const bandsFit = (period: PeriodMs, barMinutes: number, timeZone: string): boolean =>
  barMinutes >= 180 || zoneOffsetMs(period.fromMs, timeZone) % HOUR_MS === 0;

async function addResults(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  period: PeriodMs,
  sources: readonly ChannelSource[],
  bars: ReadonlyMap<string, SeriesBars>,
): Promise<void> {
  if (sources.length === 0) return;
  const channels = sources.map((source) => source.channel);
  for await (const { day, stepMinutes, channels: values } of resultSlices(em, owner, period, channels)) {
    for (const { point, channel } of sources) {
      const column = values[channel];
      if (column) bars.get(point)?.add({ day, stepMinutes, lo: column, mean: column, hi: column });
    }
  }
}
