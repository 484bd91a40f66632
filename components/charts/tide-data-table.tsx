'use client';
import { DirectionMark } from '@/components/marks/direction-mark';
import { useFormat } from '@/components/shell/units-context';
import { formatProbability, MISSING } from '@/lib/client/format';
import { formatDayTime } from '@/lib/client/format-time';
import type { Tide } from '@/lib/schemas/results';
import { ChartTable } from './chart-table';
import { directionOf } from './tide-marks';

/** The strip as a table: one row a bar. */
export function TideDataTable({ tide, timeZone }: { tide: Tide; timeZone: string }) {
  const print = useFormat();
  const flow = print.unit('flow');
  const temperature = print.unit('temperature');
  return (
    <ChartTable
      caption="Bypass flow, one row a bar"
      head={[
        { label: 'time' },
        { label: 'direction' },
        { label: 'probability', numeric: true },
        { label: `bypass, ${flow}`, numeric: true },
        { label: `90 % from, ${flow}`, numeric: true },
        { label: `90 % to, ${flow}`, numeric: true },
        { label: `supply, ${temperature}`, numeric: true },
        { label: `warmest, ${temperature}`, numeric: true },
        { label: `load, ${print.unit('load')}`, numeric: true },
      ]}
      rows={tide.bars.map((bar) => {
        const direction = directionOf(bar);
        return {
          key: bar.t,
          cells: [
            formatDayTime(bar.t, timeZone),
            <span key="direction" className="whitespace-nowrap">
              <DirectionMark direction={direction ?? 'no data'} /> {direction ?? <i>no data</i>}
            </span>,
            formatProbability(bar.probability),
            direction === 'unknown' ? MISSING : print.bypass(bar.bypassFlowGpm),
            print.bypass(bar.bypassFlowLoGpm),
            print.bypass(bar.bypassFlowHiGpm),
            print.temperature(bar.blendedSupplyF),
            print.temperature(bar.blendedSupplyMaxF),
            print.load(bar.loadTons),
          ],
        };
      })}
    />
  );
}
