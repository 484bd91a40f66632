import { describe, expect, it } from 'vitest';
import { addDays, daysBetween } from '@/lib/db/days';
import { daysOfMonth, fitDays, monthOf } from '@/lib/queries/calibration-month';

const july = monthOf('2026-07-15');

describe('the month of a day', () => {
  it('runs from its first to its last UTC day, over ends of years and leap days', () => {
    expect(monthOf('2026-12-31')).toEqual({ firstDay: '2026-12-01', lastDay: '2026-12-31' });
    expect(monthOf('2026-12-31', 1)).toEqual({ firstDay: '2027-01-01', lastDay: '2027-01-31' });
    expect(monthOf('2028-03-31', -1)).toEqual({ firstDay: '2028-02-01', lastDay: '2028-02-29' });
    expect(daysOfMonth(monthOf('2026-02-10'))).toHaveLength(28);
  });
});

describe('the days a calibration is fitted on', () => {
  it('are none where the month holds none, whatever lies beside it', () => {
    expect(fitDays(july, ['2026-06-30', '2026-08-01'])).toEqual([]);
  });

  it.each([
    [7, 7],
    [9, 7],
    [10, 10],
    [13, 10],
    [20, 14],
    [27, 21],
    [30, 28],
    [31, 31],
  ])('of %i stored days are the first %i', (stored, fitted) => {
    const days = daysBetween('2026-07-01', addDays('2026-07-01', stored - 1));
    expect(fitDays(july, days)).toEqual(days.slice(0, fitted));
  });

  it('are the first that are stored, with gaps between them', () => {
    const odd = daysOfMonth(july).filter((_, index) => index % 2 === 0);
    expect(fitDays(july, odd)).toEqual(odd.slice(0, 14));
  });

  it('are filled up to seven with the nearest of the months beside, the earlier on a tie', () => {
    const around = [
      ...daysBetween('2026-06-20', '2026-06-30'),
      '2026-07-30',
      ...daysBetween('2026-08-01', '2026-08-20'),
    ];
    expect(fitDays(july, around)).toEqual([...['2026-07-30'], ...daysBetween('2026-08-01', '2026-08-06')]);
    expect(fitDays(july, ['2026-06-28', '2026-07-02', '2026-07-30', '2026-08-03'])).toEqual([
      '2026-06-28',
      '2026-07-02',
      '2026-07-30',
      '2026-08-03',
    ]);
    const february = monthOf('2026-02-01');
    const both = [...daysBetween('2026-01-20', '2026-01-31'), '2026-02-14', ...daysBetween('2026-03-01', '2026-03-31')];
    // Nearest first: 31 January at 14 days, then pairs at 15, 16 and 17 days; of the last pair only the earlier has room.
    expect(fitDays(february, both)).toEqual([
      ...daysBetween('2026-01-28', '2026-01-31'),
      '2026-02-14',
      '2026-03-01',
      '2026-03-02',
    ]);
  });

  it('do not reach farther than 31 days nor beyond the adjoining months', () => {
    expect(fitDays(july, ['2026-05-31', '2026-07-01'])).toEqual(['2026-07-01']);
    expect(fitDays(july, ['2026-06-01', '2026-07-03', '2026-08-31'])).toEqual(['2026-07-03']);
  });

  it('stay as they are when a day comes that is not yet the next step', () => {
    const before = [...daysBetween('2026-06-20', '2026-06-30'), ...daysBetween('2026-07-01', '2026-07-03')];
    expect(fitDays(july, [...before, '2026-07-04'])).toEqual(fitDays(july, before));
  });
});
