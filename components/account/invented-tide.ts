import type { Tide, TideBar } from '@/lib/schemas/results';

const HOUR_MS = 3_600_000;

/** Start of the invented fortnight, a Monday, and its zone. */
export const INVENTED_FROM_MS = Date.UTC(2026, 5, 1);
export const INVENTED_DAYS = 14;
export const INVENTED_TO_MS = INVENTED_FROM_MS + INVENTED_DAYS * 24 * HOUR_MS;

/** Hourly tide of an invented plant for the sign-in page: the same at every visit, and of no plant that exists. */
export function inventedTide(): Tide {
  const bars: TideBar[] = [];
  for (let hour = 0; hour < INVENTED_DAYS * 24; hour++) bars.push(bar(Math.floor(hour / 24), hour % 24));
  return {
    from: new Date(INVENTED_FROM_MS).toISOString(),
    to: new Date(INVENTED_TO_MS).toISOString(),
    barMinutes: 60,
    stepMinutes: 5,
    bars,
  };
}

/** One unit at night, two from the morning start (late on weekends), a run of warm afternoons in the second week. */
function bar(day: number, hour: number): TideBar {
  const weekend = day % 7 > 4;
  const starts = weekend ? 10 : 7 + ((day * 5) % 2);
  const ripple = 26 * Math.sin(day * 12.9898 + hour * 1.7) + 14 * Math.sin(day * 3.1 + hour * 0.9);
  const warm = day >= 8 && day <= 11 ? 190 * (day - 7) * Math.max(0, Math.sin(((hour - 11) / 9) * Math.PI)) : 0;
  let bypassFlowGpm = ripple * 0.25;
  if (hour === starts - 1) bypassFlowGpm = -190 - 40 * Math.sin(day);
  else if (hour >= starts && hour < 23) bypassFlowGpm = 330 + 16 * Math.abs(hour - 15) * 2.2 + ripple - warm;
  const unknown = day === 4 && hour >= 2 && hour <= 7;
  const still = !unknown && Math.abs(bypassFlowGpm) < 6;
  const minutes = { forwardMinutes: 0, reverseMinutes: 0, stillMinutes: 0, unknownMinutes: 0 };
  if (unknown) minutes.unknownMinutes = 60;
  else if (still) minutes.stillMinutes = 60;
  else if (bypassFlowGpm < 0) minutes.reverseMinutes = 60;
  else minutes.forwardMinutes = 60;
  const half = unknown ? 320 : 30;
  return {
    t: INVENTED_FROM_MS + (day * 24 + hour) * HOUR_MS,
    ...minutes,
    probability: unknown ? 0.55 : 0.98,
    bypassFlowGpm,
    bypassFlowLoGpm: bypassFlowGpm - half,
    bypassFlowHiGpm: bypassFlowGpm + half,
    forwardFlowGpm: minutes.forwardMinutes > 0 ? bypassFlowGpm : null,
    reverseFlowGpm: minutes.reverseMinutes > 0 ? bypassFlowGpm : null,
    blendedSupplyF: null,
    blendedSupplyMaxF: null,
    primarySupplyF: null,
    primaryReturnF: null,
    secondaryReturnF: null,
    primaryFlowGpm: null,
    secondaryFlowGpm: null,
    loadTons: null,
  };
}
