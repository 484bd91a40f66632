import { fireEvent, render, screen, within } from '@testing-library/react';
import { expect, test, vi } from 'vitest';
import { CauseBars } from '@/components/charts/cause-bars';
import { ConfidenceBar } from '@/components/charts/confidence-bar';
import { CoverageCalendar } from '@/components/charts/coverage-calendar';
import { DegreeLedger } from '@/components/charts/degree-ledger';
import { ledgerLines } from '@/components/charts/ledger-lines';
import { LoadFlowScatter } from '@/components/charts/load-flow-scatter';
import { scatterPoints } from '@/components/charts/scatter-points';
import { Sparkline } from '@/components/charts/sparkline';
import { TeeTemperatures } from '@/components/charts/tee-temperatures';
import { TideMinutes } from '@/components/charts/tide-minutes';
import { TideStripSmall } from '@/components/charts/tide-strip-small';
import { Whisker } from '@/components/charts/whisker';
import { hourlyTide } from '../support/tide-bars';

const ZONE = 'America/New_York';
const FROM = Date.parse('2026-07-13T04:00:00Z');
const DAY_MS = 86_400_000;
const plain = (text: string | null | undefined) => (text ?? '').replaceAll('\u00a0', ' ');

test('the ledger is a table whose printed amounts close', () => {
  const parts = {
    designDeltaTF: 14,
    expectedDeltaTF: 12.66,
    loadF: 11.32,
    blendF: 0.54,
    dilutionF: 1.74,
    productionF: 10.12,
  };
  const onPick = vi.fn();
  render(<DegreeLedger caption="Degree ledger, 333 hours" lines={ledgerLines(parts)} onPick={onPick} />);
  const table = screen.getByRole('table', { name: /Degree ledger, 333 hours, °F/ });
  const amounts = within(table)
    .getAllByRole('row')
    .slice(1)
    .map((row) => row.querySelectorAll('td')[1]?.textContent);
  expect(amounts).toEqual(['14.0', '\u22121.4', '\u22121.3', '11.3', '+0.5', '\u22121.7', '10.1']);
  fireEvent.click(within(table).getByRole('button', { name: 'dilution' }));
  expect(onPick).toHaveBeenCalledWith('dilution');
});

test('a ledger line that is not known is a hyphen, and has no bar', () => {
  const parts = { designDeltaTF: null, expectedDeltaTF: null, loadF: 8, blendF: null, dilutionF: 0, productionF: 9 };
  const { container } = render(<DegreeLedger caption="Ledger" lines={ledgerLines(parts)} />);
  expect(screen.getByRole('row', { name: /blend rise/ }).textContent).toContain('-');
  expect(container.querySelectorAll('svg rect')).toHaveLength(3);
});

test('causes stand by what they cost, and the column adds up as printed', () => {
  render(
    <CauseBars
      currency="USD"
      causes={[
        { cause: 'coil-shortfall', hours: 4, cost: 15.4, energyKwh: 90 },
        { cause: 'surplus-production', hours: 159, cost: 154.4, energyKwh: 900 },
        { cause: 'reverse-flow', hours: 29, cost: 104.3, energyKwh: 600 },
      ]}
    />,
  );
  const rows = screen.getAllByRole('row').slice(1);
  expect(rows.map((row) => row.querySelectorAll('td')[1]?.textContent)).toEqual(['155', '104', '15', '274']);
  expect(rows[0]?.textContent).toContain('surplus production');
});

test('without a tariff causes stand by energy', () => {
  render(<CauseBars causes={[{ cause: 'reverse-flow', hours: 29, cost: null, energyKwh: 612.4 }]} />);
  expect(screen.getByRole('columnheader', { name: 'kWh' })).toBeTruthy();
  expect(screen.getByRole('row', { name: /reverse flow/ }).textContent).toContain('612');
});

test('a small strip says how long it ran backward, or that it has no data', () => {
  const week = { from: '2026-07-13', to: '2026-07-20', timeZone: ZONE, designFlowGpm: 2580 };
  const { rerender } = render(<TideStripSmall tide={hourlyTide(FROM, [100, -200, -300])} {...week} />);
  expect(screen.getByRole('img', { name: 'bypass flow, last 7 days; reverse for 2:00 hours' })).toBeTruthy();
  rerender(<TideStripSmall tide={null} {...week} />);
  expect(screen.getByRole('img', { name: 'bypass flow, last 7 days: no data' })).toBeTruthy();
});

test('a small strip breaks its line where nothing was read', () => {
  const { container } = render(
    <TideStripSmall
      tide={hourlyTide(FROM, [100, null, 100])}
      from="2026-07-13"
      to="2026-07-14"
      timeZone={ZONE}
      designFlowGpm={2580}
    />,
  );
  expect(container.querySelectorAll('line[stroke="var(--ink)"]')).toHaveLength(2);
});

test('the minutes about an hour carry the hours’ names and are one picture', () => {
  render(<TideMinutes tide={hourlyTide(FROM, [-100, -200, -150])} timeZone={ZONE} hourStart="2026-07-13T05:00:00Z" />);
  expect(screen.getByRole('img', { name: 'Bypass flow by interval, 00:00 to 03:00' })).toBeTruthy();
  expect(screen.getByText('01:00').className).toContain('font-semibold');
});

test('temperatures say how warm supply got, and t lists them', () => {
  render(<TeeTemperatures tide={hourlyTide(FROM, [100, -900])} fromMs={FROM} toMs={FROM + DAY_MS} timeZone={ZONE} />);
  const chart = screen.getByRole('img', {
    name: (text) => plain(text).includes('Supply to the buildings reached 48.5 °F'),
  });
  fireEvent.keyDown(chart, { key: 't' });
  expect(within(screen.getByRole('table', { name: /one row a bar/ })).getAllByRole('row')).toHaveLength(3);
});

test('load against flow counts its hours, and t lists them', () => {
  const points = scatterPoints(hourlyTide(FROM, [100, -200, -300]));
  render(
    <LoadFlowScatter points={points} fromMs={FROM} toMs={FROM + DAY_MS} timeZone={ZONE} unitFlowsGpm={[860, 1720]} />,
  );
  const plane = screen.getByRole('img', { name: /3 hours, 2 of them reverse/ });
  expect(plain(plane.textContent)).toContain('2 units running, 1,720');
  fireEvent.keyDown(plane, { key: 't' });
  expect(within(screen.getByRole('table', { name: /one row an hour/ })).getAllByRole('row')).toHaveLength(4);
});

test('a whisker is filled and heavy where the limit lies outside it, open where it does not', () => {
  const { container, rerender } = render(<Whisker lo={0.4} hi={0.8} mid={0.6} domain={[-1, 1]} />);
  expect(container.querySelector('circle')?.getAttribute('fill')).toBe('var(--ink)');
  expect(container.querySelector('g')?.getAttribute('stroke-width')).toBe('2');
  rerender(<Whisker lo={-0.4} hi={0.8} mid={0.2} domain={[-1, 1]} />);
  expect(container.querySelector('circle')?.getAttribute('fill')).toBe('var(--paper)');
});

test('a sparkline breaks at what is missing', () => {
  const { container } = render(<Sparkline values={[1, 2, null, 3]} />);
  expect(container.querySelector('path')?.getAttribute('d')?.match(/M/g)).toHaveLength(2);
});

test('confidence under one half is dotted: a person has to decide', () => {
  const { container, rerender } = render(<ConfidenceBar confidence={0.44} />);
  expect(container.querySelector('rect')?.getAttribute('fill')).toBe('url(#dots)');
  expect(container.textContent).toBe('.44');
  rerender(<ConfidenceBar confidence={0.97} />);
  expect(container.querySelector('rect')?.getAttribute('fill')).not.toBe('url(#dots)');
});

test('coverage is a table by week for readers, bold under nine tenths; a day is read by key, by pointer and by tap', () => {
  const { container } = render(
    <CoverageCalendar
      from="2026-07-13"
      describe={(day) => `From ${day}.csv.`}
      rows={[
        { key: 'a', label: 'Primary flow', days: [1, 1, 1, 1, 1, 1, 1, 0.5] },
        { key: 'b', label: 'Bypass temperature', days: Array.from({ length: 8 }, () => null) },
      ]}
    />,
  );
  const table = screen.getByRole('table', { name: /Coverage/ });
  expect(plain(within(table).getByRole('row', { name: /Primary flow/ }).textContent)).toBe('Primary flow100 %50 %');
  expect(within(table).getByRole('row', { name: /Bypass/ }).textContent).toContain('none');
  expect(screen.getByText((text) => plain(text) === '94 %').className).not.toContain('font-semibold');
  const calendar = screen.getByRole('group', { name: /Coverage by point and day/ });
  const reading = () => plain(screen.getByRole('status').textContent);
  fireEvent.keyDown(calendar, { key: 'End' });
  expect(reading()).toBe('Primary flow, Mon 20 Jul: 50 % of the day arrived. From 2026-07-20.csv.');
  fireEvent.keyDown(calendar, { key: 'ArrowDown' });
  expect(reading()).toBe('Bypass temperature, Mon 20 Jul: nothing arrived. From 2026-07-20.csv.');
  fireEvent.keyDown(calendar, { key: 'Escape' });
  expect(reading()).toBe('Point at a day, or tap it, to read it.');
  const bars = container.querySelectorAll('svg')[0] as SVGSVGElement;
  vi.spyOn(bars, 'getBoundingClientRect').mockReturnValue(new DOMRect(0, 0, 80, 24));
  fireEvent.pointerDown(bars, { clientX: 25 });
  expect(reading()).toContain('Primary flow, Wed 15 Jul: 100 %');
  // A day that was tapped stays while the pointer moves on.
  fireEvent.pointerMove(bars, { clientX: 55 });
  expect(reading()).toContain('Wed 15 Jul');
});
