import type { Series } from '../schemas/results';
import {
  celsiusDeltaFromFahrenheitDelta,
  celsiusFromFahrenheit,
  kilowattsFromTons,
  litresPerSecondFromGpm,
  PSI_KPA,
} from '../units';
import { figure } from './figures';
import type { ChannelQuantity, SeriesSource } from './series-points';
import type { Quantity } from '../units';

interface SiUnit {
  unit: string;
  convert: (value: number) => number;
}

/** Quantities that read differently in SI; the others stay as they are. */
const SI: Readonly<Partial<Record<Quantity | ChannelQuantity, SiUnit>>> = {
  temperature: { unit: '°C', convert: celsiusFromFahrenheit },
  temperatureDifference: { unit: 'K', convert: celsiusDeltaFromFahrenheitDelta },
  flow: { unit: 'L/s', convert: litresPerSecondFromGpm },
  load: { unit: 'kW', convert: kilowattsFromTons },
  pressure: { unit: 'kPa', convert: (value) => value * PSI_KPA },
};

/** Chart data in SI. The names of the points stay as they were asked for; the unit stands beside each. */
export function seriesInSi(series: Series, sources: readonly SeriesSource[]): Series {
  return {
    ...series,
    series: series.series.map((each, index) => {
      const si = SI[sources[index]?.quantity ?? 'share'];
      if (!si) return each;
      const converted = (values: (number | null)[]) =>
        values.map((value) => (value === null ? null : figure(si.convert(value))));
      return { ...each, unit: si.unit, lo: converted(each.lo), mean: converted(each.mean), hi: converted(each.hi) };
    }),
  };
}
