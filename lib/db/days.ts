/** UTC days as `YYYY-MM-DD`, the key of every block. */
const DAY_MS = 86_400_000;

export const dayStartMs = (day: string): number => Date.parse(`${day}T00:00:00Z`);
export const dayOf = (epochMs: number): string => new Date(epochMs).toISOString().slice(0, 10);
export const addDays = (day: string, days: number): string => dayOf(dayStartMs(day) + days * DAY_MS);

/** All days from `from` to `to`, both included. */
export function daysBetween(from: string, to: string): string[] {
  const days: string[] = [];
  for (let at = dayStartMs(from); at <= dayStartMs(to); at += DAY_MS) days.push(dayOf(at));
  return days;
}
