'use client';
import { useFormat } from '@/components/shell/units-context';
import type { HourDetail } from '@/lib/schemas/results';
import { teeDrawing, teeScale, type TeeFlows } from './tee-geometry';
import { TeePipes } from './tee-pipes';
import { StationNumber } from './tee-station';
import { stationOf, teeSentence } from './tee-words';

const SIZE = { width: 358, height: 232 };
const BANDS = { left: 0, right: 358, top: 20, bottom: 220, pipe: 166 };
const THICKEST_PX = 62;

/** The sheet at a phone's width: numbered stations, the two supplies' figures in the empty quarters. */
export function TeePhone({ detail, flows, valve }: { detail: HourDetail; flows: TeeFlows; valve: boolean }) {
  const print = useFormat();
  const drawing = teeDrawing(flows, { ...BANDS, pxPerGpm: teeScale([flows], THICKEST_PX) });
  const left = stationOf(detail, 'production-supply');
  const right = stationOf(detail, 'supply-to-buildings');
  const between = (above: number, below: number) => (above + below) / 2;
  const leftY = between(drawing.supplyLeft, drawing.returnLeft);
  const rightY = between(drawing.supplyRight, drawing.returnRight);
  const pipeRight =
    detail.direction === 'unknown' ? BANDS.pipe + drawing.pipeWidth / 2 : BANDS.pipe + drawing.pipeWidth;
  // Where a band is of two waters the number stands on the one that goes right through.
  const solid = Math.min(drawing.supplyLeft, drawing.supplyRight);
  const numbers = [
    { number: 1, x: 92, y: between(BANDS.top, solid) },
    { number: 2, x: 262, y: between(BANDS.top, solid) },
    { number: 3, x: 262, y: between(drawing.returnRight, BANDS.bottom) },
    { number: 4, x: 92, y: between(Math.max(drawing.returnLeft, drawing.returnRight), BANDS.bottom) },
    { number: 5, x: Math.min(pipeRight + 18, 240), y: between(drawing.supplyRight, drawing.returnRight) },
  ];
  return (
    <svg
      role="img"
      aria-label={teeSentence(detail, drawing.crossingShare, print)}
      viewBox={`0 0 ${SIZE.width} ${SIZE.height}`}
      width="100%"
      className="block"
    >
      <text x="0" y="11" fontSize="12" fill="var(--ink2)">
        production
      </text>
      <text x={SIZE.width} y="11" fontSize="12" textAnchor="end" fill="var(--ink2)">
        buildings, {print.with(print.load(detail.hour.loadTons), 'load')}
      </text>
      <TeePipes drawing={drawing} valve={valve ? { x: BANDS.pipe + drawing.pipeWidth / 2, y: leftY } : undefined} />
      {numbers.map((one) => (
        <StationNumber key={one.number} {...one} />
      ))}
      <Quarter x={0} y={leftY} tempF={left?.reconciledTempF ?? null} flowGpm={left?.reconciledFlowGpm ?? null} />
      <Quarter
        x={SIZE.width}
        y={rightY}
        end
        tempF={right?.reconciledTempF ?? null}
        flowGpm={right?.reconciledFlowGpm ?? null}
      />
    </svg>
  );
}

interface QuarterProps {
  x: number;
  y: number;
  end?: boolean;
  tempF: number | null;
  flowGpm: number | null;
}

function Quarter({ x, y, end = false, tempF, flowGpm }: QuarterProps) {
  const print = useFormat();
  const anchor = end ? 'end' : 'start';
  return (
    <g>
      <text x={x} y={y - 3} fontSize="15" fontWeight="600" textAnchor={anchor} fill="var(--ink)">
        {print.with(print.temperature(tempF), 'temperature')}
      </text>
      <text x={x} y={y + 15} fontSize="13" textAnchor={anchor} fill="var(--ink)">
        {print.with(print.flow(flowGpm), 'flow')}
      </text>
    </g>
  );
}
