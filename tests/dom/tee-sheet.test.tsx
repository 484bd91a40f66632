import { fireEvent, render, screen, within } from '@testing-library/react';
import { describe, expect, test } from 'vitest';
import { TeeSheet, type TeeSheetProps } from '@/components/tees/tee-sheet';
import { reverseHour } from '../support/hour-detail';

const plain = (text: string | null | undefined) => (text ?? '').replaceAll('\u00a0', ' ');
const show = (given: Partial<TeeSheetProps> = {}) => {
  render(<TeeSheet detail={reverseHour()} {...given} />);
  return screen.getByRole('group', { name: /^Tee sheet/ });
};

test('the sheet’s name is a sentence: direction, flow with its interval, and what it makes of the supply', () => {
  const sheet = show();
  expect(plain(sheet.getAttribute('aria-label'))).toBe(
    'Tee sheet. Reverse: \u2212966 gpm (\u22121,059 to \u2212872); return water rises through the common pipe; 36 % of this supply is return water.',
  );
});

test('the five stations are met in order, each saying what was measured and what was worked out', () => {
  const sheet = show();
  const stations = within(sheet).getAllByRole('group');
  expect(stations.map((station) => station.getAttribute('tabindex'))).toEqual(['0', '0', '0', '0', '0']);
  expect(plain(stations[1]?.getAttribute('aria-label'))).toBe(
    'Station 2, Supply to buildings: measured 49.7 °F, reconciled 49.1 °F ±0.2; measured 2,671 gpm, reconciled 2,686 gpm ±40',
  );
  expect(plain(stations[4]?.getAttribute('aria-label'))).toContain(
    'measured none, reconciled \u2212966 gpm \u22121,059 to \u2212872',
  );
});

test('the same stations are a table, in the page at every width', () => {
  show();
  const table = screen.getByRole('table', { name: /Stations of the tee sheet/ });
  const rows = within(table).getAllByRole('row').slice(1);
  expect(rows).toHaveLength(5);
  expect(plain(rows[2]?.textContent)).toContain('Return from buildings');
  expect(plain(rows[2]?.textContent)).toContain('57.9');
  expect(plain(rows[4]?.textContent)).toContain('Common pipe, reverse');
});

test('a measurement that does not fit is tagged on the sheet and in the table', () => {
  const sheet = show({ doubted: [{ station: 'supply-to-buildings', quantity: 'temperature' }] });
  expect(within(sheet).getAllByText('doubt')).toHaveLength(1);
  const table = screen.getByRole('table', { name: /Stations of the tee sheet/ });
  expect(within(table).getAllByText('doubt')).toHaveLength(1);
});

describe('when the direction is unknown', () => {
  const detail = reverseHour({
    direction: 'unknown',
    bypassFlowGpm: null,
    bypassFlowLoGpm: -670,
    bypassFlowHiGpm: 750,
    stations: reverseHour().stations.map((station) =>
      station.station === 'common-pipe'
        ? { ...station, reconciledFlowGpm: null, flowLoGpm: -670, flowHiGpm: 750 }
        : { ...station, reconciledFlowGpm: 1700 },
    ),
  });

  test('no sign and no share are given, only the interval', () => {
    const sheet = show({ detail });
    const name = plain(sheet.getAttribute('aria-label'));
    expect(name).toBe('Tee sheet. Direction unknown: from \u2212670 to +750 gpm; no sign is given.');
    expect(sheet.textContent).not.toContain('of this supply');
  });
});

test('forward water is said to thin the return', () => {
  const stations = reverseHour().stations.map((station) => {
    const flow = { 'production-supply': 2580, 'return-to-production': 2580, 'common-pipe': 594 }[
      station.station as string
    ];
    return { ...station, reconciledFlowGpm: flow ?? 1986 };
  });
  const detail = reverseHour({
    direction: 'forward',
    bypassFlowGpm: 594,
    bypassFlowLoGpm: 534,
    bypassFlowHiGpm: 654,
    stations,
  });
  expect(plain(show({ detail }).textContent)).toContain('23 % of this return is supply water');
});

test('m draws the widths as the meters said, and back', () => {
  const sheet = show();
  expect(screen.queryByText(/measured widths/)).toBeNull();
  fireEvent.keyDown(sheet, { key: 'm' });
  expect(screen.getByText(/measured widths/)).toBeTruthy();
  fireEvent.keyDown(sheet, { key: 'm' });
  expect(screen.queryByText(/measured widths/)).toBeNull();
});

test('units are drawn one by one where they are known, and counted where they are not', () => {
  const sheet = show();
  expect(sheet.textContent).toContain('2units running');
});

test('a unit that is off says so', () => {
  const sheet = show({
    units: [
      { name: 'CH-1', loadTons: 489, running: true, share: 0.98 },
      { name: 'CH-2', loadTons: null, running: false, share: null },
    ],
  });
  expect(plain(sheet.textContent)).toContain('CH-1489 tons');
  expect(sheet.textContent).toContain('CH-2off');
});

test('a building bridge shows how much it is meant to blend', () => {
  expect(plain(show({ arrangement: 'building-bridge', expectedBridgeGpm: 620 }).textContent)).toContain(
    'expected up to 620 gpm',
  );
});
