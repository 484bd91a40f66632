import type { TimestampForm } from './types';

const two = (value: number) => String(value).padStart(2, '0');

/** A wall time (counted as if it were UTC) as the file itself writes it, for sentences: `07/24/2026 03:10`; always with its year. */
export function stampText(localMs: number, form: TimestampForm): string {
  return `${dateText(localMs, form)} ${clockText(localMs)}`;
}

function dateText(localMs: number, form: TimestampForm): string {
  const date = new Date(localMs);
  const [year, month, day] = [date.getUTCFullYear(), two(date.getUTCMonth() + 1), two(date.getUTCDate())];
  if (form.startsWith('month')) return `${month}/${day}/${year}`;
  return form.startsWith('day') ? `${day}/${month}/${year}` : `${year}-${month}-${day}`;
}

/** `03:10`, with seconds only where there are any. */
export function clockText(localMs: number): string {
  const date = new Date(localMs);
  const seconds = date.getUTCSeconds();
  const clock = `${two(date.getUTCHours())}:${two(date.getUTCMinutes())}`;
  return seconds === 0 ? clock : `${clock}:${two(seconds)}`;
}
