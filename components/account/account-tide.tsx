'use client';
import { useMemo } from 'react';
import { tideExtent, tideMarks } from '@/components/charts/tide-marks';
import { TideRows } from '@/components/charts/tide-rows';
import { DirectionMark } from '@/components/marks/direction-mark';
import { INVENTED_FROM_MS, INVENTED_TO_MS, inventedTide } from './invented-tide';

/** Fourteen days of tide, one a row: what the product shows, before anyone has signed in. Invented, and said to be. */
export function AccountTide() {
  const { tide, marks, extent } = useMemo(() => {
    const made = inventedTide();
    const drawn = tideMarks(made);
    return { tide: made, marks: drawn, extent: tideExtent(drawn) };
  }, []);
  return (
    <figure className="min-w-0 phone:mt-10">
      <figcaption className="mb-4 flex flex-wrap justify-between gap-x-6 text-ink-2">
        <b className="text-ink">An invented plant</b>
        <span className="flex flex-wrap items-center gap-x-1.5">
          bypass flow, fourteen days, one row a day; <DirectionMark direction="forward" /> supply crosses over,{' '}
          <DirectionMark direction="reverse" /> return comes back
        </span>
      </figcaption>
      <TideRows
        tide={tide}
        marks={marks}
        extent={extent}
        fromMs={INVENTED_FROM_MS}
        toMs={INVENTED_TO_MS}
        timeZone="UTC"
        label="Bypass flow of an invented plant over fourteen days: forward most of the day, reverse at the morning start and on four warm afternoons"
        rowHeightPx={49}
        reverseWord="reverse"
      />
    </figure>
  );
}
