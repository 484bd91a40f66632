'use client';
import { useFormat } from '@/components/shell/units-context';
import type { StationFigures } from './tee-words';
import { stationSentence } from './tee-words';

export interface TeeStationProps {
  x: number;
  y: number;
  number: number;
  label: string;
  figures: StationFigures;
  doubtTemp: boolean;
  doubtFlow: boolean;
}

/** A station of the sheet: number, name, and two rows of what was measured beside what was worked out. */
export function TeeStation({ x, y, number, label, figures, doubtTemp, doubtFlow }: TeeStationProps) {
  const print = useFormat();
  return (
    <g
      transform={`translate(${x} ${y})`}
      tabIndex={0}
      role="group"
      aria-label={stationSentence(`Station ${number}, ${label}`, figures, print)}
    >
      <StationNumber x={8} y={8} number={number} />
      <text x="23" y="12.5" fontSize="13" fontWeight="600" fill="var(--ink)">
        {label}
      </text>
      <text x="92" y="29" fontSize="11" textAnchor="end" fontStyle="italic" fill="var(--ink2)">
        measured
      </text>
      <text x="156" y="29" fontSize="11" textAnchor="end" fill="var(--ink2)">
        reconciled
      </text>
      <line x1="0" x2="198" y1="34.5" y2="34.5" stroke="var(--rule)" />
      <Row
        y={49}
        unit={print.unit('temperature')}
        measured={figures.measuredTemp}
        reconciled={figures.reconciledTemp}
        interval={figures.tempInterval}
        doubt={doubtTemp}
      />
      <Row
        y={69}
        unit={print.unit('flow')}
        measured={figures.measuredFlow}
        reconciled={figures.reconciledFlow}
        interval={figures.flowInterval}
        doubt={doubtFlow}
      />
    </g>
  );
}

interface RowProps {
  y: number;
  unit: string;
  measured: string;
  reconciled: string;
  interval: string;
  doubt: boolean;
}

function Row({ y, unit, measured, reconciled, interval, doubt }: RowProps) {
  return (
    <g>
      <text x="0" y={y} fontSize="11" fill="var(--ink3)">
        {unit}
      </text>
      {doubt ? <DoubtTag y={y} /> : null}
      <text x="92" y={y} fontSize="13" textAnchor="end" fontStyle="italic" fill="var(--ink2)">
        {measured}
      </text>
      <text x="156" y={y} fontSize="17" fontWeight="600" textAnchor="end" fill="var(--ink)">
        {reconciled}
      </text>
      <text x="163" y={y} fontSize="12" fill="var(--ink2)">
        {interval}
      </text>
    </g>
  );
}

/** The reversed tag of a measurement that does not fit, between unit and figure. */
function DoubtTag({ y }: { y: number }) {
  return (
    <g>
      <rect x="25" y={y - 10.5} width="32" height="13" fill="var(--ink)" />
      <text x="41" y={y - 0.5} fontSize="10.5" fontWeight="600" textAnchor="middle" fill="var(--paper)">
        doubt
      </text>
    </g>
  );
}

export function StationNumber({ x, y, number }: { x: number; y: number; number: number }) {
  return (
    <g>
      <circle cx={x} cy={y} r="8.5" fill="var(--paper)" stroke="var(--ink)" strokeWidth="1" />
      <text x={x} y={y + 4} fontSize="11" fontWeight="600" textAnchor="middle" fill="var(--ink)">
        {number}
      </text>
    </g>
  );
}
