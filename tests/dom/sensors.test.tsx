import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { fireEvent, render, screen, within } from '@testing-library/react';
import { expect, test, vi } from 'vitest';
import { FurtherTable } from '@/components/sensors/further-table';
import { SpotCheckList } from '@/components/sensors/spot-check-list';
import { SensorsTable } from '@/components/sensors/sensors-table';
import { UnitsProvider } from '@/components/shell/units-context';
import type { FurtherSensor, SpotCheck } from '@/lib/schemas/sensors';
import { sensor } from '../support/sensors';

vi.mock('next/link', () => ({ default: 'a' }));

const PERIOD = {
  from: '2026-07-13',
  to: '2026-07-27',
  fromMs: Date.parse('2026-07-13T04:00:00Z'),
  toMs: Date.parse('2026-07-27T04:00:00Z'),
};
const SENSORS = [
  sensor('primarySupplyTemp', { offset: [-0.1, -0.3, 0.1] }),
  sensor('secondarySupplyTemp', { offset: [0.6, 0.4, 0.8], use: 'corrected' }),
  sensor('primaryFlow', {
    gain: [-2.1, -3.9, -0.4],
    use: 'corrected',
    stretches: [{ kind: 'stuck', from: '2026-07-18T10:00:00Z', to: '2026-07-18T16:00:00Z' }],
  }),
  sensor('bypassTemp', { points: [], coverage: null }),
];

const show = (units: 'ip' | 'si' = 'ip') =>
  render(
    <UnitsProvider initial={units}>
      <SensorsTable plantId="p1" timeZone="America/New_York" sensors={SENSORS} period={PERIOD} />
    </UnitsProvider>,
  );
const rowOf = (name: string) => screen.getByRole('row', { name: new RegExp(`^${name}`) });
const text = (element: HTMLElement) => element.textContent.replaceAll('\u00a0', ' ');

test('each row says the likely error, its interval, the evidence and what was done; its drawings are for the eye only', () => {
  show();
  const row = rowOf('Secondary supply');
  expect(text(row)).toContain('+0.6 °F');
  expect(text(row)).toContain('+0.4 to +0.8');
  expect(text(row)).toContain('it reads 0.6 ±0.2 °F warm');
  expect(within(row).getByText('corrected')).toBeTruthy();
  expect(text(rowOf('Primary supply'))).toContain('used');
  expect(within(row).queryAllByRole('img')).toEqual([]);
  for (const drawing of row.querySelectorAll('svg')) expect(drawing.getAttribute('aria-hidden')).toBe('true');
});

test('bad stretches stand in words beside the line', () => {
  show();
  expect(text(rowOf('Primary flow'))).toContain('stuck 6 h');
  expect(text(rowOf('Primary supply'))).toContain('arrived and passed throughout');
  expect(text(rowOf('Bypass temperature'))).toContain('Never sent.');
});

test('zero outside the interval is drawn filled and heavy, zero inside open and light', () => {
  show();
  const dot = (name: string) => rowOf(name).querySelector('circle');
  expect(dot('Secondary supply')?.getAttribute('fill')).toBe('var(--ink)');
  expect(dot('Primary supply')?.getAttribute('fill')).toBe('var(--paper)');
  expect(dot('Bypass temperature')).toBeNull();
});

test('in SI degrees are kelvins and percents stay', () => {
  show('si');
  expect(text(rowOf('Secondary supply'))).toContain('+0.3 K');
  expect(text(rowOf('Primary flow'))).toContain('−2.1 %');
});

test('j and k move along the sensors, and each leads to the hours behind it', () => {
  show();
  fireEvent.keyDown(window, { key: 'j' });
  fireEvent.keyDown(window, { key: 'j' });
  expect(document.activeElement?.textContent).toBe('Secondary supply');
  expect(document.activeElement?.getAttribute('href')).toBe('/plants/p1?from=2026-07-13&to=2026-07-27');
  fireEvent.keyDown(window, { key: 'k' });
  expect(document.activeElement?.textContent).toBe('Primary supply');
});

const further = (more: Partial<FurtherSensor>): FurtherSensor => ({
  role: 'bypassTemp',
  label: 'Bypass temperature',
  kind: 'new',
  why: 'In the middle of the common pipe.',
  effort: 'an hour’s work',
  sigmaF: 0.3,
  sigmaPercent: null,
  nowHalfWidthGpm: 94,
  withHalfWidthGpm: 52,
  nowHalfWidthShare: null,
  withHalfWidthShare: null,
  nowUnknownHours: 23,
  withUnknownHours: 6,
  ...more,
});

test('the next point to trend stands first with what it would do, in gpm or, where no flow is known, in shares', () => {
  const { rerender } = render(
    <FurtherTable further={[further({}), further({ role: 'bypassFlow', label: 'Bypass flow' })]} />,
  );
  const [, first] = screen.getAllByRole('row');
  expect(text(first as HTMLElement)).toContain('±94±5223 to 6an hour’s work');
  rerender(
    <FurtherTable
      further={[
        further({ nowHalfWidthGpm: null, withHalfWidthGpm: null, nowHalfWidthShare: 0.21, withHalfWidthShare: 0.1 }),
      ]}
    />,
  );
  expect(text(screen.getAllByRole('row')[1] as HTMLElement)).toContain('±21.0±10.0');
});

const CHECK: SpotCheck = {
  id: '4af37fef-c66c-405c-8b73-202b16eee5d8',
  at: '2026-07-24T19:10:00Z',
  role: 'secondarySupplyTemp',
  unitIndex: 0,
  label: 'Secondary supply',
  readingF: 44.1,
  readingGpm: null,
  shownF: 44.5,
  shownGpm: null,
  shownFrom: 'record',
  sigmaF: 0.1,
  sigmaPercent: null,
  instrument: 'dry block 3',
  note: 'at the well',
  createdBy: null,
  createdAt: '2026-07-24T19:20:00Z',
};
const showChecks = (mayRemove: boolean) =>
  render(
    <QueryClientProvider client={new QueryClient()}>
      <UnitsProvider initial="ip">
        <SpotCheckList
          plantId="p1"
          timeZone="America/New_York"
          checks={[
            CHECK,
            {
              ...CHECK,
              id: 'b',
              label: 'Primary flow',
              role: 'primaryFlow',
              readingF: null,
              readingGpm: 1000,
              shownF: null,
              shownGpm: 979,
            },
          ]}
          mayRemove={mayRemove}
          onRemoved={() => undefined}
        />
      </UnitsProvider>
    </QueryClientProvider>,
  );

test('a spot check says what the plant’s own sensor read too much, in degrees or in percent of the reading', () => {
  showChecks(false);
  const [, first, second] = screen.getAllByRole('row');
  expect(text(first as HTMLElement)).toContain('+0.4 °F');
  expect(text(second as HTMLElement)).toContain('−2.1 %');
  expect(screen.queryByRole('button')).toBeNull();
});

test('taking a spot check out is asked once, and the question says what follows', () => {
  showChecks(true);
  fireEvent.click(screen.getByRole('button', { name: /^remove the check of Secondary supply, Fri\s24\sJul 15:10/ }));
  expect(text(screen.getByRole('dialog'))).toContain('the record is worked out again without it');
  fireEvent.click(screen.getByRole('button', { name: 'Keep it' }));
  expect(screen.queryByRole('dialog')).toBeNull();
});
