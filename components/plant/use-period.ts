'use client';
import { differenceInCalendarDays, parseISO } from 'date-fns';
import { usePathname, useRouter, useSearchParams } from 'next/navigation';
import { useMemo, useState } from 'react';
import { addLocalDays, localDay, startOfLocalDay } from '@/lib/client/format-time';
import type { Plant } from '@/lib/schemas/plant';

export const PERIOD_DAYS = { day: 1, week: 7, '2 weeks': 14, month: 28 } as const;
export type PeriodName = keyof typeof PERIOD_DAYS | 'own';

/** The local days a page shows, `to` not included; in the address, so that a link shows what its sender saw. */
export interface PagePeriod {
  from: string;
  to: string;
  fromMs: number;
  toMs: number;
  days: number;
  name: PeriodName;
}

type PlantClock = Pick<Plant, 'timeZone' | 'dataFrom' | 'dataThrough'>;

const DAY = /^\d{4}-\d{2}-\d{2}$/;

/** The period a page starts with: two weeks that end with the last day of data, or all of a shorter record. */
export function defaultPeriod(plant: PlantClock, nowMs: number): { from: string; to: string } {
  const lastDay = localDay(plant.dataThrough === null ? nowMs : Date.parse(plant.dataThrough), plant.timeZone);
  const fortnight = addLocalDays(lastDay, -13);
  const firstDay = plant.dataFrom === null ? fortnight : localDay(Date.parse(plant.dataFrom), plant.timeZone);
  return { from: firstDay > fortnight ? firstDay : fortnight, to: addLocalDays(lastDay, 1) };
}

export function pagePeriod(
  asked: { from: string | null; to: string | null },
  plant: PlantClock,
  nowMs: number,
): PagePeriod {
  const fits = DAY.test(asked.from ?? '') && DAY.test(asked.to ?? '') && (asked.from ?? '') < (asked.to ?? '');
  const { from, to } = fits ? { from: asked.from ?? '', to: asked.to ?? '' } : defaultPeriod(plant, nowMs);
  const days = differenceInCalendarDays(parseISO(to), parseISO(from));
  const name =
    (Object.keys(PERIOD_DAYS) as (keyof typeof PERIOD_DAYS)[]).find((key) => PERIOD_DAYS[key] === days) ?? 'own';
  return {
    from,
    to,
    fromMs: startOfLocalDay(from, plant.timeZone),
    toMs: startOfLocalDay(to, plant.timeZone),
    days,
    name,
  };
}

/** The period in the address, and the ways to another. */
export function usePeriod(plant: PlantClock) {
  const router = useRouter();
  const pathname = usePathname();
  const search = useSearchParams();
  const from = search.get('from');
  const to = search.get('to');
  const { timeZone, dataFrom, dataThrough } = plant;
  const [openedMs] = useState(() => Date.now());
  const period = useMemo(
    () => pagePeriod({ from, to }, { timeZone, dataFrom, dataThrough }, openedMs),
    [from, to, timeZone, dataFrom, dataThrough, openedMs],
  );
  const go = (next: { from: string; to: string }) => {
    const query = new URLSearchParams(search);
    query.set('from', next.from);
    query.set('to', next.to);
    router.replace(`${pathname}?${query.toString()}`, { scroll: false });
  };
  return {
    period,
    choose: go,
    /** Another length that ends where this one ends. */
    setLength: (days: number) => go({ from: addLocalDays(period.to, -days), to: period.to }),
    /** The stretch before (-1) or after (+1). */
    step: (by: -1 | 1) =>
      go({ from: addLocalDays(period.from, by * period.days), to: addLocalDays(period.to, by * period.days) }),
  };
}
