'use client';
import { useFormat } from '@/components/shell/units-context';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { MISSING } from '@/lib/client/format';
import type { HourDetail } from '@/lib/schemas/results';
import { Tag } from '@/components/ui/tag';
import { stationFigures, stationOf, STATIONS, type Doubt } from './tee-words';

/** The five stations as a table: in the page at every width, in sight where the sheet has no room for its figures. */
export function TeeTable({ detail, doubted = [] }: { detail: HourDetail; doubted?: readonly Doubt[] }) {
  const print = useFormat();
  const pair = (
    figure: string,
    interval: string,
    quantity: 'temperature' | 'flow',
    { strong = false, doubt = false }: { strong?: boolean; doubt?: boolean },
  ) =>
    figure === MISSING ? (
      <span className="block">{MISSING}</span>
    ) : (
      <span className="block whitespace-nowrap">
        {doubt ? <Tag variant="reversed">doubt</Tag> : null}{' '}
        <span className={strong ? 'font-semibold' : 'italic'}>{figure}</span> {interval} {print.unit(quantity)}
      </span>
    );
  return (
    <Table bare caption="Stations of the tee sheet: measured beside reconciled">
      <thead>
        <tr>
          <HeadCell>
            <span className="sr-only">number</span>
          </HeadCell>
          <HeadCell>station</HeadCell>
          <HeadCell numeric>measured</HeadCell>
          <HeadCell numeric>reconciled</HeadCell>
        </tr>
      </thead>
      <tbody>
        {STATIONS.map(({ station, number, label }) => {
          const signed = station === 'common-pipe';
          const figures = stationFigures(stationOf(detail, station), signed, print, 'short');
          const doubt = (quantity: Doubt['quantity']) =>
            doubted.some((one) => one.station === station && one.quantity === quantity);
          return (
            <tr key={station}>
              <Cell>{number}</Cell>
              <RowHead>{signed ? `${label}, ${detail.direction}` : label}</RowHead>
              <Cell numeric className="text-ink-2">
                {pair(figures.measuredTemp, '', 'temperature', { doubt: doubt('temperature') })}
                {pair(figures.measuredFlow, '', 'flow', { doubt: doubt('flow') })}
              </Cell>
              <Cell numeric>
                {pair(figures.reconciledTemp, figures.tempInterval, 'temperature', { strong: true })}
                {pair(figures.reconciledFlow, figures.flowInterval, 'flow', { strong: true })}
              </Cell>
            </tr>
          );
        })}
      </tbody>
    </Table>
  );
}
