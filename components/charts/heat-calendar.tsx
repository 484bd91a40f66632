'use client';
import { useMemo, useRef, useState, type KeyboardEvent } from 'react';
import { INK } from '@/components/marks/pattern-defs';
import { useUnits } from '@/components/shell/units-context';
import { usePhone } from '@/components/ui/use-phone';
import { formatDayShort } from '@/lib/client/format-time';
import type { Direction } from '@/lib/client/words';
import type { HourRow } from '@/lib/schemas/results';
import { HeatKey } from './heat-key';
import { heatCellName, heatRows, squareSide, type HeatCell, type HeatRow } from './heat-cells';
import { useWidth } from './use-width';

export interface HeatCalendarProps {
  /** Every hour of the period (`all=true`), also the good ones. */
  hours: readonly HourRow[];
  fromMs: number;
  toMs: number;
  timeZone: string;
  /** Excess flow of a full cell; fixed a plant, so that periods compare. */
  referenceGpm?: number;
  /** Directions of the hours where they are at hand (from the tide); an hour's row alone cannot tell still from forward. */
  directionOf?: (hour: HourRow) => Direction;
  /** The hour that is ringed: selected, or under the pointer in the list beside. */
  ringed?: string | null;
  onHover?: (hourStart: string | null) => void;
  onSelect?: (hourStart: string) => void;
}

const LABEL_PX = 52;
const HEAD_PX = 20;
const TALL_PX = 44;

/** Day down, hour across; the area of a square is the hour's excess flow. No ramp of colour: it reads in a photocopy. */
export function HeatCalendar(props: HeatCalendarProps) {
  const { hours, fromMs, toMs, timeZone, referenceGpm = 1100, directionOf, ringed = null, onHover, onSelect } = props;
  const { units } = useUnits();
  const phone = usePhone();
  const [box, widthPx] = useWidth(454);
  const rows = useMemo(
    () => heatRows(hours, fromMs, toMs, timeZone, directionOf),
    [hours, fromMs, toMs, timeZone, directionOf],
  );
  const [active, setActive] = useState<string | null>(null);
  /** On a phone the tapped day stands tall, its cells wide enough for a thumb. */
  const [tall, setTall] = useState<string | null>(null);
  const grid = useRef<SVGSVGElement>(null);
  const first = rows.find((row) => row.cells.length > 0)?.cells[0]?.hour.hourStart ?? null;
  const tabbable = active ?? ringed ?? first;
  const labelPx = phone ? 46 : LABEL_PX;
  const cellPx = (widthPx - labelPx) / 24;
  const heightOf = (row: HeatRow) => (phone && row.day === tall ? TALL_PX : cellPx);
  const tops: number[] = [];
  let height = HEAD_PX;
  for (const row of rows) {
    tops.push(height);
    height += heightOf(row);
  }
  const choose = (cell: HeatCell, row: HeatRow) => {
    setActive(cell.hour.hourStart);
    if (phone && tall !== row.day) setTall(row.day);
    else onSelect?.(cell.hour.hourStart);
  };
  const onKeyDown = (event: KeyboardEvent<SVGSVGElement>) => {
    const at = find(rows, tabbable);
    if (at === null) return;
    const next = neighbour(rows, at, event.key);
    if (event.key === 'Enter' || event.key === ' ') onSelect?.(at.cell.hour.hourStart);
    else if (next === null) return;
    else {
      setActive(next.hour.hourStart);
      grid.current?.querySelector<SVGGElement>(`[data-hour="${next.hour.hourStart}"]`)?.focus();
    }
    event.preventDefault();
  };
  return (
    <div ref={box} className="min-w-0">
      <svg
        ref={grid}
        role="grid"
        aria-label="Heat calendar: excess flow of low delta-T hours, day by hour"
        width={widthPx}
        height={height + 1}
        viewBox={`0 0 ${widthPx} ${height + 1}`}
        className="block max-w-full"
        onKeyDown={onKeyDown}
        onPointerLeave={() => onHover?.(null)}
      >
        <Heads labelPx={labelPx} cellPx={cellPx} height={height} />
        {rows.map((row, index) => (
          <Day
            key={row.day}
            {...{ row, timeZone, units, referenceGpm, labelPx, cellPx, widthPx, ringed, tabbable, onHover }}
            top={tops[index] ?? 0}
            heightPx={heightOf(row)}
            onChoose={(cell) => choose(cell, row)}
          />
        ))}
        <line x1="0" x2={widthPx} y1={HEAD_PX + 0.5} y2={HEAD_PX + 0.5} stroke="var(--ink)" />
        <line x1="0" x2={widthPx} y1={height + 0.5} y2={height + 0.5} stroke="var(--ink)" />
      </svg>
      <HeatKey referenceGpm={referenceGpm} cellPx={17} />
    </div>
  );
}

function Heads({ labelPx, cellPx, height }: { labelPx: number; cellPx: number; height: number }) {
  return (
    <g role="row">
      <g role="columnheader" aria-label="day" />
      {Array.from({ length: 24 }, (_, hour) => (
        <g key={hour} role="columnheader" aria-label={`${String(hour).padStart(2, '0')}:00`}>
          {hour % 6 === 0 ? (
            <>
              <text x={labelPx + hour * cellPx} y="13" fontSize="11" fill="var(--ink2)">
                {String(hour).padStart(2, '0')}
              </text>
              <line
                x1={Math.round(labelPx + hour * cellPx) + 0.5}
                x2={Math.round(labelPx + hour * cellPx) + 0.5}
                y1={HEAD_PX - 3}
                y2={height}
                stroke="var(--grid)"
              />
            </>
          ) : null}
        </g>
      ))}
    </g>
  );
}

interface DayProps {
  row: HeatRow;
  top: number;
  heightPx: number;
  timeZone: string;
  units: 'ip' | 'si';
  referenceGpm: number;
  labelPx: number;
  cellPx: number;
  widthPx: number;
  ringed: string | null;
  tabbable: string | null;
  onHover?: (hourStart: string | null) => void;
  onChoose: (cell: HeatCell) => void;
}

function Day(props: DayProps) {
  const { row, top, heightPx, timeZone, units, labelPx, cellPx, widthPx, ringed, tabbable, onHover, onChoose } = props;
  const marked = row.cells.some((cell) => cell.hour.hourStart === ringed);
  return (
    <g role="row">
      <line x1="0" x2={widthPx} y1={top + 0.5} y2={top + 0.5} stroke={row.opensWeek ? 'var(--ink)' : 'var(--grid)'} />
      <text
        role="rowheader"
        x="0"
        y={top + heightPx / 2 + 4}
        fontSize="11"
        fill={marked ? 'var(--ink)' : 'var(--ink2)'}
        fontWeight={marked ? 600 : 400}
      >
        {formatDayShort(row.startMs, timeZone)}
      </text>
      {row.cells.map((cell) => {
        const half = cell.half === 'whole' ? cellPx : cellPx / 2;
        const left = labelPx + cell.clock * cellPx + (cell.half === 'second' ? half : 0);
        return (
          <g
            key={cell.startMs}
            role="gridcell"
            aria-label={heatCellName(cell, timeZone, units)}
            aria-selected={cell.hour.hourStart === ringed}
            data-hour={cell.hour.hourStart}
            tabIndex={cell.hour.hourStart === tabbable ? 0 : -1}
            onClick={() => onChoose(cell)}
            onPointerEnter={() => onHover?.(cell.hour.hourStart)}
            className="cursor-pointer"
          >
            <rect x={left} y={top + 1} width={half} height={heightPx - 1} fill="transparent" />
            <Square
              cell={cell}
              x={left + half / 2}
              y={top + heightPx / 2 + 0.5}
              side={Math.min(half - 1, squareSide(cell.excessGpm, props.referenceGpm, cellPx))}
            />
            {cell.hour.hourStart === ringed ? (
              <rect
                x={left + 0.5}
                y={top + heightPx / 2 - cellPx / 2 + 1}
                width={half - 1}
                height={cellPx - 1}
                fill="none"
                stroke="var(--ink)"
                strokeWidth="1.75"
              />
            ) : null}
          </g>
        );
      })}
    </g>
  );
}

function Square({ cell, x, y, side }: { cell: HeatCell; x: number; y: number; side: number }) {
  if (cell.kind === 'not low') return <rect x={x - 0.6} y={y - 0.6} width="1.2" height="1.2" fill="var(--ink3)" />;
  const dots = 10;
  if (cell.kind === 'unknown') {
    return <rect x={x - dots / 2} y={y - dots / 2} width={dots} height={dots} fill={INK.unknown} />;
  }
  const paint = {
    forward: { fill: 'var(--fwd)', stroke: 'none' },
    reverse: { fill: INK.reverse[2], stroke: 'var(--rev)' },
    still: { fill: 'none', stroke: 'var(--ink)' },
  }[cell.kind];
  return <rect x={x - side / 2} y={y - side / 2} width={side} height={side} strokeWidth="0.9" {...paint} />;
}

interface Found {
  row: number;
  cell: HeatCell;
}

function find(rows: readonly HeatRow[], hourStart: string | null): Found | null {
  for (const [row, { cells }] of rows.entries()) {
    const cell = cells.find((one) => one.hour.hourStart === hourStart);
    if (cell !== undefined) return { row, cell };
  }
  return null;
}

/** The cell an arrow key leads to; days without the same hour are stepped over. */
function neighbour(rows: readonly HeatRow[], { row, cell }: Found, key: string): HeatCell | null {
  const cells = rows[row]?.cells ?? [];
  const at = cells.indexOf(cell);
  if (key === 'ArrowRight') return cells[at + 1] ?? rows[row + 1]?.cells[0] ?? null;
  if (key === 'ArrowLeft') return cells[at - 1] ?? rows[row - 1]?.cells.at(-1) ?? null;
  if (key === 'Home') return cells[0] ?? null;
  if (key === 'End') return cells.at(-1) ?? null;
  const by = key === 'ArrowDown' ? 1 : key === 'ArrowUp' ? -1 : 0;
  if (by === 0) return null;
  for (let next = row + by; next >= 0 && next < rows.length; next += by) {
    const same = rows[next]?.cells.find((one) => one.clock === cell.clock);
    if (same !== undefined) return same;
  }
  return null;
}
