import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { TIMESTAMP_FORMS, TrendError, type TimestampForm } from '@/lib/trends';
import { findTime } from '@/lib/trends/time-column';
import { DayMonthWitness } from '@/lib/trends/time-witness';
import { StampParser } from '@/lib/trends/timestamps';
import { LocalClock } from '@/lib/trends/zone-offsets';
import { wallTime } from './support';

const DAY_MS = 86_400_000;
const ZONES = [
  'UTC',
  'America/Denver',
  'America/St_Johns',
  'Europe/Berlin',
  'Asia/Kolkata',
  'Asia/Kathmandu',
  'Australia/Sydney',
  'Australia/Lord_Howe',
  'Pacific/Chatham',
];
const MONTHS = 'Jan Feb Mar Apr May Jun Jul Aug Sep Oct Nov Dec'.split(' ');
const WEEKDAYS = 'Sun Mon Tue Wed Thu Fri Sat'.split(' ');
const two = (value: number) => String(value).padStart(2, '0');

/** The parts of a wall time, taken from Intl and not from the code under test. */
function partsOf(wall: string) {
  const [y, mo, d, h, mi, s] = wall.match(/\d+/g)!.map(Number) as [number, number, number, number, number, number];
  const weekday = WEEKDAYS[new Date(Date.UTC(y, mo - 1, d)).getUTCDay()]!;
  const clock = `${two(h)}:${two(mi)}:${two(s)}`;
  const half = `${h % 12 || 12}:${two(mi)}:${two(s)}`;
  return { y, mo, d, h, mi, s, weekday, clock, half };
}
type Parts = ReturnType<typeof partsOf>;
const am = ({ h }: Parts) => (h < 12 ? 'AM' : 'PM');
const serialOf = ({ y, mo, d, h, mi, s }: Parts) => Date.UTC(y, mo - 1, d, h, mi, s) / DAY_MS + 25_569;

/** Ways to write a wall time. */
const LOCAL: [TimestampForm, string, (p: Parts) => string][] = [
  ['iso', 'blank', (p) => `${p.y}-${two(p.mo)}-${two(p.d)} ${p.clock}`],
  ['iso', 'T', (p) => `${p.y}-${two(p.mo)}-${two(p.d)}T${p.clock}.000`],
  ['iso', 'compact', (p) => `${p.y}${two(p.mo)}${two(p.d)}T${p.clock.replaceAll(':', '')}`],
  ['iso', 'digits', (p) => `${p.y}${two(p.mo)}${two(p.d)}${p.clock.replaceAll(':', '')}`],
  ['iso', 'points', (p) => `${p.y}-${two(p.mo)}-${two(p.d)}-${p.clock.replaceAll(':', '.')}`],
  ['year/month/day', 'slashes', (p) => `${p.y}/${p.mo}/${p.d} ${p.clock}`],
  ['month/day/year', 'half days', (p) => `${p.mo}/${p.d}/${p.y} ${p.half} ${am(p)}`],
  [
    'month/day/year',
    'half days glued',
    (p) => `${two(p.mo)}/${two(p.d)}/${two(p.y % 100)} ${p.half}${am(p).toLowerCase()}`,
  ],
  ['month/day/year', 'a.m.', (p) => `${p.mo}/${p.d}/${p.y} ${p.half} ${p.h < 12 ? 'a.m.' : 'p.m.'}`],
  ['month/day/year', 'words', (p) => `${p.weekday}, ${MONTHS[p.mo - 1]} ${p.d}, ${p.y} ${p.clock}`],
  ['month/day/year', 'year behind', (p) => `${p.weekday} ${MONTHS[p.mo - 1]} ${p.d} ${p.clock} ${p.y}`],
  ['day/month/year', 'points', (p) => `${two(p.d)}.${two(p.mo)}.${p.y} ${p.clock}`],
  ['day/month/year', 'hyphens', (p) => `${p.d}-${MONTHS[p.mo - 1]}-${two(p.y % 100)} ${p.clock}`],
  ['month/day', 'two blanks', (p) => `${two(p.mo)}/${two(p.d)}  ${p.clock}`],
  ['day/month', 'points', (p) => `${two(p.d)}.${two(p.mo)}. ${p.clock}`],
  ['spreadsheet-serial', 'point', (p) => serialOf(p).toFixed(7)],
  ['spreadsheet-serial', 'comma', (p) => serialOf(p).toFixed(7).replace('.', ',')],
  ['spreadsheet-serial', 'two cells', (p) => `${Math.floor(serialOf(p))} ${p.clock}`],
];

/** Any second from 1990 to 2069. */
const second = fc.integer({ min: 631_152_000, max: 3_124_000_000 }).map((seconds) => seconds * 1000);

describe('any instant, written in any zone, reads back to itself', () => {
  test.each(LOCAL)('%s, %s', (form, way, write) => {
    fc.assert(
      fc.property(second, fc.constantFrom(...ZONES), (ms, timeZone) => {
        const wall = wallTime(ms, timeZone);
        const parts = partsOf(wall);
        const parser = new StampParser(form, way === 'comma' ? ',' : '.', parts.y);
        const clock = new LocalClock(timeZone);
        expect([parser.parse(write(parts)), parser.hasOffset]).toEqual([true, false]);
        const read = clock.toUtc(parser.ms, false, 0);
        // A time met alone in a repeated hour can be of either pass.
        expect(clock.kind === 'repeated' ? wallTime(read, timeZone) : read).toBe(clock.kind === 'repeated' ? wall : ms);
      }),
      { numRuns: 300 },
    );
  });

  test('with its offset, even in a repeated hour', () => {
    fc.assert(
      fc.property(second, fc.constantFrom(...ZONES), fc.boolean(), (ms, timeZone, colon) => {
        const wall = wallTime(ms, timeZone);
        const eastMinutes = Math.round((Date.parse(`${wall.replace(' ', 'T')}Z`) - ms) / 60_000);
        const [h, m] = [two(Math.floor(Math.abs(eastMinutes) / 60)), two(Math.abs(eastMinutes) % 60)];
        const offset = `${eastMinutes < 0 ? '-' : '+'}${h}${colon ? ':' : ''}${m}`;
        const parser = new StampParser('iso');
        expect([parser.parse(wall.replace(' ', 'T') + offset), parser.hasOffset, parser.ms]).toEqual([true, true, ms]);
        expect([parser.parse(new Date(ms).toISOString()), parser.ms]).toEqual([true, ms]);
      }),
    );
  });

  test('as a number since 1970, in s, ms, µs and ns', () => {
    fc.assert(
      fc.property(second, (ms) => {
        const writes: [TimestampForm, string][] = [
          ['epoch-s', String(ms / 1000)],
          ['epoch-s', `${ms / 1e12}e9`],
          ['epoch-ms', String(ms)],
          ['epoch-ms', `${ms}000`],
          ['epoch-ms', `${ms}000000`],
        ];
        for (const [form, text] of writes) {
          const parser = new StampParser(form);
          expect([parser.parse(text), parser.ms, text]).toEqual([true, ms, text]);
        }
      }),
    );
  });
});

describe('any log reads back row by row', () => {
  const log = fc.record({
    from: second,
    // Up to 150 days from row to row: nearer than half a year.
    steps: fc.array(fc.integer({ min: 1, max: 150 * 86_400 }), { maxLength: 40 }),
    backward: fc.boolean(),
  });
  test.each([
    ['month/day', (p: Parts) => `${p.mo}/${p.d} ${p.clock}`],
    ['day/month', (p: Parts) => `${MONTHS[p.mo - 1]} ${p.d}, ${p.half} ${am(p)}`],
  ] as const)('%s without a year, whichever end comes first', (form, write) => {
    fc.assert(
      fc.property(log, ({ from, steps, backward }) => {
        const instants = [from];
        for (const step of steps) instants.push(instants.at(-1)! + (backward ? -step : step) * 1000);
        const parser = new StampParser(form, '.', new Date(from).getUTCFullYear());
        for (const ms of instants) {
          const text = write(partsOf(wallTime(ms, 'UTC')));
          expect([parser.parse(text), new Date(parser.ms).toISOString()]).toEqual([true, new Date(ms).toISOString()]);
        }
      }),
    );
  });

  test('dates in the first row of a day, or of the file alone when rows are less than half a day apart', () => {
    fc.assert(
      fc.property(
        second,
        fc.array(fc.integer({ min: 1, max: 43_199 }), { minLength: 1, maxLength: 60 }),
        fc.boolean(),
        fc.constantFrom(...LOCAL.filter(([, way]) => ['blank', 'half days', 'two blanks'].includes(way))),
        (from, steps, onceADay, [form, , write]) => {
          const parser = new StampParser(form, '.', new Date(from).getUTCFullYear());
          let ms = from;
          let day = Number.NaN;
          for (const step of [0, ...steps]) {
            ms += step * 1000;
            const parts = partsOf(wallTime(ms, 'UTC'));
            const dated = Number.isNaN(day) || (onceADay && Math.floor(ms / DAY_MS) !== day);
            day = Math.floor(ms / DAY_MS);
            const text = dated ? write(parts) : parts.clock;
            expect([parser.parse(text), parser.ms, text]).toEqual([true, ms, text]);
          }
        },
      ),
    );
  });
});

describe('whatever a cell holds', () => {
  const PIECES =
    '0 1 12 24 60 99 2026 20260828 202608280005 1784505900 46223 0.5 / - . , : T Z + am p.m. Fri Aug décembre EST [x] 02/29 08/28 00:05 24:00 \u00a0 \0 e9 ∞ 😀'.split(
      ' ',
    );
  const cell = fc.oneof(
    fc.string({ unit: 'binary', maxLength: 24 }),
    fc.array(fc.constantFrom(...PIECES, ' ', '  '), { maxLength: 9 }).map((pieces) => pieces.join('')),
  );

  test('a parser answers, and what it reads is an instant', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...TIMESTAMP_FORMS),
        fc.constantFrom('.', ','),
        fc.array(cell, { maxLength: 12 }),
        (form, decimal, cells) => {
          const parser = new StampParser(form, decimal, 2024);
          const witness = new DayMonthWitness(form, decimal);
          cells.forEach((text, row) => {
            if (!parser.parse(text)) return witness.refuse(text, row);
            witness.accept(parser);
            expect(Number.isSafeInteger(parser.ms)).toBe(true);
            expect(Math.abs(parser.ms)).toBeLessThan(8.64e15);
          });
          expect(witness.error()).toBeInstanceOf(TrendError);
        },
      ),
      { numRuns: 20_000 },
    );
  }, 60_000);

  test('what a parser has read before changes nothing for a stamp that holds its own date and year', () => {
    const dated = LOCAL.filter(([form]) => form.split('/').length !== 2);
    fc.assert(
      fc.property(
        fc.constantFrom(...dated),
        second,
        fc.array(cell, { maxLength: 8 }),
        ([form, way, write], ms, before) => {
          const decimal = way === 'comma' ? ',' : '.';
          const parser = new StampParser(form, decimal);
          for (const text of before) parser.parse(text);
          expect([parser.parse(write(partsOf(wallTime(ms, 'UTC')))), parser.ms]).toEqual([true, ms]);
        },
      ),
      { numRuns: 3000 },
    );
  });

  test('a table gets a time or a TrendError in a sentence', () => {
    const table = fc.array(fc.array(cell, { minLength: 3, maxLength: 3 }), { maxLength: 12 });
    const name = fc.constantFrom('Time', 'Interval Ending', 'a', '', 'Date', 'HE');
    fc.assert(
      fc.property(table, fc.tuple(name, name, name), fc.constantFrom(...ZONES), (rows, names, timeZone) => {
        try {
          const data = rows.map((cells, i) => ({ cells, row: i + 2 }));
          const { plan, cells } = findTime(names, data, timeZone, '.', { nowMs: Date.UTC(2026, 11, 1) });
          expect(plan.columns).toHaveLength(cells.length);
          if (plan.form === 'month/day' || plan.form === 'day/month') expect(plan.year).toBeGreaterThan(1990);
        } catch (error) {
          if (!(error instanceof TrendError)) throw error;
          expect(error.message).toMatch(/^[A-Z].*[.]$/s);
        }
      }),
      { numRuns: 3000 },
    );
  }, 60_000);
});
