/** Share of a stretch of days that arrived; null when nothing was ever sent. */
export const coverageShare = (days: readonly (number | null)[]): number | null => {
  if (days.length === 0 || days.every((day) => day === null)) return null;
  return days.reduce<number>((sum, day) => sum + (day ?? 0), 0) / days.length;
};

/** `24 Jul`, or `Fri 24 Jul` of a local day. */
export const dayName = (day: string, withWeekday = false): string =>
  new Intl.DateTimeFormat('en-GB', {
    ...(withWeekday ? { weekday: 'short' as const } : {}),
    day: 'numeric',
    month: 'short',
    timeZone: 'UTC',
  })
    .format(Date.parse(day))
    .replace(',', '');

/** The first day, and every Monday after it. */
export const weekStarts = (days: readonly string[]): string[] =>
  days.filter((day, index) => index === 0 || new Date(`${day}T00:00:00Z`).getUTCDay() === 1);
