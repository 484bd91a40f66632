import { localDaySpan, type PeriodMs } from './period';

/** `North energy centre hours 2026-07-13 to 2026-07-26.csv`: says in a folder what the file holds. */
export function downloadName(
  plant: { name: string; timeZone: string },
  what: string,
  period: PeriodMs,
  extension: string,
): string {
  const { firstDay, lastDay } = localDaySpan(period, plant.timeZone);
  return `${plant.name} ${what} ${firstDay} to ${lastDay}.${extension}`;
}
