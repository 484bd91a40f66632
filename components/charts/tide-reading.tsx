'use client';
import Link from 'next/link';
import type { Ref } from 'react';
import { DirectionMark } from '@/components/marks/direction-mark';
import { useFormat } from '@/components/shell/units-context';
import { MISSING } from '@/lib/client/format';
import { formatDayTime, isoInstant, startOfLocalHour } from '@/lib/client/format-time';
import type { TideBar } from '@/lib/schemas/results';
import { directionOf } from './tide-marks';

export interface TideReadingProps {
  bar: TideBar;
  barMinutes: number;
  timeZone: string;
  /** Path of an hour's page; left out where bars are longer than an hour. */
  hourHref?: (hourStart: string) => string;
  linkRef?: Ref<HTMLAnchorElement>;
  pinned?: boolean;
}

/** What the cursor is on: time, direction, bypass with its interval, supply, load, and the way to the hour. */
export function TideReading({ bar, barMinutes, timeZone, hourHref, linkRef, pinned = false }: TideReadingProps) {
  const print = useFormat();
  const direction = directionOf(bar);
  const interval = print.bypassInterval(bar.bypassFlowLoGpm, bar.bypassFlowHiGpm);
  // Never force a sign: an unknown direction shows its interval and no value.
  const flow = direction === 'unknown' ? MISSING : print.bypass(bar.bypassFlowGpm);
  return (
    <p className="flex flex-wrap items-baseline gap-x-2.5 text-ink">
      <b>{formatDayTime(bar.t, timeZone)}</b>
      <span className="whitespace-nowrap">
        <DirectionMark direction={direction ?? 'no data'} label={direction ?? 'no data'} />{' '}
        {direction === null ? <i>no data</i> : direction === 'unknown' ? 'unknown' : print.with(flow, 'flow')}
        {interval === MISSING ? null : <span className="text-ink-2"> ({interval})</span>}
      </span>
      {bar.blendedSupplyF === null ? null : (
        <span className="whitespace-nowrap">
          supply {print.with(print.temperature(bar.blendedSupplyF), 'temperature')}
        </span>
      )}
      {bar.loadTons === null ? null : (
        <span className="whitespace-nowrap">load {print.with(print.load(bar.loadTons), 'load')}</span>
      )}
      {pinned ? <span className="text-ink-2">held</span> : null}
      {hourHref === undefined || barMinutes > 60 || direction === null ? null : (
        <Link ref={linkRef} data-open className="link" href={hourHref(isoInstant(startOfLocalHour(bar.t, timeZone)))}>
          open the hour
        </Link>
      )}
    </p>
  );
}
