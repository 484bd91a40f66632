import { weekdayOf } from './stamp-date';
import { DAY_MS, StampParser } from './timestamps';
import type { TimestampForm } from './types';
import { LocalClock } from './zone-offsets';

/** After so many years weekdays and leap days come again as they were. */
const CYCLE_YEARS = 28;
const LEAP_YEAR = 2024;

export interface ProposedYear {
  year: number;
  /** Rows that name a weekday, and those of them whose date falls on it. */
  weekdays: number;
  fitting: number;
}

/**
 * The year of the first row of a column whose dates have none: one in which every date exists and falls on the weekday
 * the row names, and of those the latest that puts no row in the future.
 *
 * `nowMs` is an instant; the texts are wall times of the zone.
 */
export function proposeYear(
  texts: readonly string[],
  form: TimestampForm,
  decimal: '.' | ',',
  timeZone: string,
  nowMs: number,
): ProposedYear {
  const telling = firstAndLastOfDays(texts, form, decimal);
  const localNowMs = nowMs + new LocalClock(timeZone).offsetMs(nowMs);
  const latest = new Date(localNowMs).getUTCFullYear();
  let best: ProposedYear & { readable: number } = { year: latest, readable: -1, weekdays: 0, fitting: -1 };
  for (let year = latest; year > latest - CYCLE_YEARS; year--) {
    const tried = tryYear(telling, form, decimal, year);
    if (tried.lastMs > localNowMs) continue;
    const isBetter =
      tried.readable > best.readable || (tried.readable === best.readable && tried.fitting > best.fitting);
    if (isBetter) best = { year, ...tried };
    if (best.readable === telling.length && best.fitting === best.weekdays) break;
  }
  return best;
}

/** The texts at which the date changes, the ones before them, and the last. */
function firstAndLastOfDays(texts: readonly string[], form: TimestampForm, decimal: '.' | ','): string[] {
  const parser = new StampParser(form, decimal, LEAP_YEAR);
  const kept: string[] = [];
  let day = Number.NaN;
  let last = '';
  for (const text of texts) {
    if (!parser.parse(text)) continue;
    const now = Math.floor(parser.ms / DAY_MS);
    if (now !== day) {
      if (last !== '' && last !== kept.at(-1)) kept.push(last);
      kept.push(text);
      day = now;
    }
    last = text;
  }
  if (last !== '' && last !== kept.at(-1)) kept.push(last);
  return kept;
}

function tryYear(texts: readonly string[], form: TimestampForm, decimal: '.' | ',', year: number) {
  const parser = new StampParser(form, decimal, year);
  const tried = { readable: 0, weekdays: 0, fitting: 0, lastMs: Number.NEGATIVE_INFINITY };
  for (const text of texts) {
    if (!parser.parse(text)) continue;
    tried.readable++;
    tried.lastMs = Math.max(tried.lastMs, parser.ms);
    if (parser.weekday === -1) continue;
    tried.weekdays++;
    if (parser.weekday === weekdayOf(parser.dayMs)) tried.fitting++;
  }
  return tried;
}
