import { fireEvent, render, screen, waitFor, within } from '@testing-library/react';
import { beforeAll, describe, expect, test, vi } from 'vitest';
import { TideStrip, type TideStripProps } from '@/components/charts/tide-strip';
import { TimeViewProvider } from '@/components/charts/time-view';
import { UnitsProvider } from '@/components/shell/units-context';
import type { Tide } from '@/lib/schemas/results';
import { drawn } from '../support/dom-setup';
import { hourlyTide } from '../support/tide-bars';

const ZONE = 'America/New_York';
const HOUR_MS = 3_600_000;
const FROM = Date.parse('2026-07-13T04:00:00Z');
const TO = FROM + 48 * HOUR_MS;
const FLOWS = Array.from({ length: 48 }, (_, hour) =>
  hour === 3 ? null : hour === 5 ? 'unknown' : hour === 15 ? -966 : 300,
);
const TIDE = hourlyTide(FROM, FLOWS);
const plain = (text: string | null) => (text ?? '').replaceAll('\u00a0', ' ');

function show(given: Partial<TideStripProps> = {}, units: 'ip' | 'si' = 'ip') {
  const onRange = vi.fn();
  render(
    <UnitsProvider initial={units}>
      <TimeViewProvider fromMs={FROM} toMs={TO} onRange={onRange}>
        <TideStrip
          tide={TIDE}
          fromMs={FROM}
          toMs={TO}
          timeZone={ZONE}
          hourHref={(hourStart) => `/hours/${hourStart}`}
          {...given}
        />
      </TimeViewProvider>
    </UnitsProvider>,
  );
  return { strip: screen.getByRole('application'), onRange };
}

beforeAll(() => {
  const style = document.createElement('style');
  style.textContent = ':root { --fwd: #1b5e7b; --ink: #13201e; --paper: #f7f8f5; --rev: #ae3f10; --ink3: #5c6966; }';
  document.head.append(style);
});

describe('what a reader who cannot see is told', () => {
  test('the strip’s name is a sentence with its totals and its extreme', () => {
    const { strip } = show();
    const name = plain(strip.getAttribute('aria-label'));
    expect(name).toContain('reverse for 1:00 hours');
    expect(name).toContain('largest \u2212966 gpm at Mon 13 Jul 15:00');
    expect(name).toContain('direction unknown for 1:00 hours');
  });

  test('the tide table has a row a figure and a cell a column', () => {
    show();
    const table = screen.getByRole('table', { name: 'Tide table' });
    const reverse = within(table).getByRole('row', { name: /reverse, h:min/ });
    expect(
      within(reverse)
        .getAllByRole('cell')
        .map((cell) => cell.textContent),
    ).toEqual(['·', '·', '1:00', '·', '·', '·', '·', '·']);
  });

  test('a moved cursor is said after at most half a second', async () => {
    const { strip } = show();
    fireEvent.keyDown(strip, { key: 'Home' });
    await waitFor(
      () => expect(plain(strip.textContent)).toContain('Mon 13 Jul 00:00, forward, +300 gpm, probability 97 percent'),
      {
        timeout: 1500,
      },
    );
  });
});

describe('the reading', () => {
  // On the heading line; a phone has it under the day's row instead.
  const link = () => screen.getAllByRole('link', { name: 'open the hour' })[0];
  const reading = () => plain(link()?.closest('p')?.textContent ?? '');

  test('begins at the deepest reverse bar', () => {
    show();
    expect(reading()).toContain('Mon 13 Jul 15:00');
    expect(reading()).toContain('\u2212966 gpm (\u22121,016 to \u2212916)');
    expect(reading()).toContain('supply 48.8 °F');
  });

  test('leads to the hour it is on', () => {
    show();
    expect(link()?.getAttribute('href')).toBe('/hours/2026-07-13T19:00:00Z');
  });

  test('gives an unknown bar its interval and no value', () => {
    const { strip } = show();
    fireEvent.keyDown(strip, { key: 'Home' });
    for (let press = 0; press < 5; press += 1) fireEvent.keyDown(strip, { key: 'ArrowRight' });
    const here = plain(strip.closest('section')?.querySelector('p.flex b')?.closest('p')?.textContent ?? '');
    expect(here).toContain('Mon 13 Jul 05:00');
    expect(here).toContain('unknown (\u221250 to +50)');
  });

  test('prints in the reader’s units', () => {
    show({}, 'si');
    expect(reading()).toContain('L/s');
    expect(reading()).toContain('°C');
  });
});

describe('the drawing', () => {
  test('fills forward bars with the forward ink, hatches reverse ones and dots the unknown', async () => {
    show();
    await waitFor(() => expect(drawn).toContain('fillRect #1b5e7b'));
    expect(drawn.filter((mark) => mark === 'fillRect pattern')).not.toHaveLength(0);
    expect(drawn).toContain('fill pattern');
  });

  test('is drawn again in the other theme’s inks', async () => {
    const style = document.createElement('style');
    style.textContent = ":root[data-theme='dark'] { --fwd: #79bddb; }";
    document.head.append(style);
    show();
    await waitFor(() => expect(drawn).toContain('fillRect #1b5e7b'));
    drawn.length = 0;
    document.documentElement.dataset.theme = 'dark';
    await waitFor(() => expect(drawn).toContain('fillRect #79bddb'));
    style.remove();
  });

  test('without data the still line is there, with words and no figures of a scale', async () => {
    const { strip } = show({ tide: null, frameWords: 'reading 48 hours' });
    expect(strip.textContent).toContain('reading 48 hours');
    expect(strip.textContent).not.toMatch(/[+\u2212]\d/);
    await waitFor(() => expect(drawn).toContain('stroke #13201e'));
  });

  test('a gap in the data is named', () => {
    const { strip } = show();
    expect(strip.textContent).toContain('no data');
  });

  test('a bar beyond the plot carries its figure', () => {
    const flows = [...Array.from({ length: 47 }, (_, hour) => 300 + hour), 9000];
    const { strip } = show({ tide: hourlyTide(FROM, flows) });
    expect(strip.textContent).toContain('+9,000');
  });

  test('what is being worked on is fenced and named', () => {
    const { strip } = show({ pending: { fromMs: FROM + 40 * HOUR_MS, toMs: TO, words: 'analysing 1 day, 62 %' } });
    expect(strip.textContent).toContain('analysing 1 day, 62 %');
  });
});

describe('keys and buttons', () => {
  test('t shows one row a bar, and the button brings the drawing back', () => {
    const { strip } = show();
    fireEvent.keyDown(strip, { key: 't' });
    const table = screen.getByRole('table', { name: 'Bypass flow, one row a bar' });
    expect(within(table).getAllByRole('row')).toHaveLength(49);
    expect(plain(within(table).getAllByRole('row')[6]?.textContent ?? '')).toContain('unknown');
    fireEvent.click(screen.getByRole('button', { name: 'drawing' }));
    expect(screen.getByRole('application')).toBeTruthy();
  });

  test('zooming tells the page, so that it can fetch finer bars', () => {
    const { strip, onRange } = show();
    fireEvent.keyDown(strip, { key: '+' });
    expect(onRange).toHaveBeenCalledWith(expect.objectContaining({ fromMs: expect.any(Number) as number }), false);
    fireEvent.keyDown(strip, { key: '-' });
    expect(onRange).toHaveBeenLastCalledWith({ fromMs: FROM, toMs: TO }, true);
  });

  test('keys with Ctrl are left to the browser', () => {
    const { strip, onRange } = show();
    fireEvent.keyDown(strip, { key: '+', ctrlKey: true });
    expect(onRange).not.toHaveBeenCalled();
  });
});

describe('one day a row, for a phone', () => {
  const day = () => screen.getByRole('slider', { name: /Mon.*reverse 1:00/ });

  test('each day says its reverse time, and a day without any shows a middle dot', () => {
    show();
    const rows = screen.getAllByRole('slider');
    expect(rows.map((row) => plain(row.getAttribute('aria-label')))).toEqual([
      'Mon 13 Jul, reverse 1:00',
      'Tue 14 Jul, reverse 0:00',
    ]);
    expect(rows[1]?.parentElement?.textContent).toContain('·');
  });

  test('an arrow key moves the hour, and its words are the row’s value', () => {
    show();
    fireEvent.keyDown(day(), { key: 'Home' });
    expect(plain(day().getAttribute('aria-valuetext'))).toContain('00:00, forward');
    fireEvent.keyDown(day(), { key: 'ArrowRight' });
    expect(plain(day().getAttribute('aria-valuetext'))).toContain('01:00, forward');
  });

  test('a tap chooses an hour, and the same tap again opens it', () => {
    show();
    day().getBoundingClientRect = () => new DOMRect(0, 0, 240, 44);
    fireEvent.click(day(), { clientX: 85 });
    expect(plain(day().getAttribute('aria-valuetext'))).toContain('08:00');
    const opened = vi.fn();
    for (const link of screen.getAllByRole('link', { name: 'open the hour' })) {
      link.addEventListener('click', (event) => {
        event.preventDefault();
        opened(link.getAttribute('href'));
      });
    }
    fireEvent.click(day(), { clientX: 85 });
    expect(opened).toHaveBeenCalledWith('/hours/2026-07-13T12:00:00Z');
  });
});

test('a chart taken off the page lets go of its canvas', async () => {
  const { strip } = show();
  await waitFor(() => expect(strip.querySelector('canvas')).not.toBeNull());
  const host = strip.querySelector('.uplot')?.parentElement;
  fireEvent.keyDown(strip, { key: 't' });
  expect(host?.querySelector('.uplot')).toBeNull();
});

test('a tide of longer bars than an hour offers no hour to open', () => {
  const days: Tide = { ...TIDE, barMinutes: 180 };
  show({ tide: days });
  expect(screen.queryByRole('link', { name: 'open the hour' })).toBeNull();
});
