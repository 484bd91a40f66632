'use client';
import { useState, type KeyboardEvent } from 'react';
import { useFormat } from '@/components/shell/units-context';
import { Section } from '@/components/ui/section';
import type { HourDetail } from '@/lib/schemas/results';
import { teeDrawing, teeScale, type TeeDrawing } from './tee-geometry';
import { TeePhone } from './tee-phone';
import { TeePipes } from './tee-pipes';
import { TeeBuildings, TeeUnits, type TeeUnit } from './tee-sides';
import { TeeStation } from './tee-station';
import { TeeTable } from './tee-table';
import {
  crossingSentence,
  stationFigures,
  stationOf,
  STATIONS,
  teeFlows,
  teeSentence,
  type Doubt,
  type StationName,
} from './tee-words';

export interface TeeSheetProps {
  detail: HourDetail;
  arrangement?: 'primary-secondary' | 'variable-primary' | 'building-bridge';
  /** The production units in order; without them the box says how many ran. */
  units?: readonly TeeUnit[];
  /** A building bridge blends by design, up to this much. */
  expectedBridgeGpm?: number;
  doubted?: readonly Doubt[];
}

const SIZE = { width: 854, height: 520 };
const BANDS = { left: 150, right: 712, top: 112, bottom: 404, pipe: 386 };
const THICKEST_PX = 80;
const PLACES: Readonly<Record<Exclude<StationName, 'common-pipe'>, { x: number; y: number }>> = {
  'production-supply': { x: BANDS.left, y: 6 },
  'supply-to-buildings': { x: 514, y: 6 },
  'return-from-buildings': { x: 514, y: 424 },
  'return-to-production': { x: BANDS.left, y: 424 },
};

/** Both tees and the common pipe, all widths on one scale of flow; each number with its interval, measured beside reconciled. */
export function TeeSheet(props: TeeSheetProps) {
  const { detail } = props;
  const [widths, setWidths] = useState<'reconciled' | 'measured'>('reconciled');
  const flows = teeFlows(detail, widths);
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key !== 'm' || event.ctrlKey || event.metaKey || event.altKey) return;
    setWidths((before) => (before === 'reconciled' ? 'measured' : 'reconciled'));
  };
  return (
    <Section
      title="Tee sheet"
      sub={
        <>
          {widths === 'measured' ? 'measured widths' : 'widths'} to scale of flow; <i>measured</i> beside{' '}
          <b>reconciled</b>
        </>
      }
    >
      <div className="@container" onKeyDown={onKeyDown}>
        <div className="@max-[719px]:hidden">
          <Sheet
            {...props}
            drawing={teeDrawing(flows, { ...BANDS, pxPerGpm: teeScale([flows], THICKEST_PX) })}
            pxPerGpm={teeScale([flows], THICKEST_PX)}
          />
        </div>
        <div className="hidden @max-[719px]:block">
          <TeePhone detail={detail} flows={flows} valve={props.arrangement === 'variable-primary'} />
        </div>
        <div className="sr-only @max-[719px]:not-sr-only">
          <TeeTable detail={detail} doubted={props.doubted} />
        </div>
      </div>
    </Section>
  );
}

interface SheetProps extends TeeSheetProps {
  drawing: TeeDrawing;
  pxPerGpm: number;
}

function Sheet({ detail, arrangement, units = [], expectedBridgeGpm, doubted = [], drawing, pxPerGpm }: SheetProps) {
  const print = useFormat();
  const crossing = crossingSentence(detail.direction, drawing.crossingShare);
  const reverse = detail.direction === 'reverse';
  const isDoubted = (station: StationName, quantity: 'temperature' | 'flow') =>
    doubted.some((one) => one.station === station && one.quantity === quantity);
  const middle =
    (Math.max(drawing.supplyLeft, drawing.supplyRight) + Math.min(drawing.returnLeft, drawing.returnRight)) / 2;
  const pipeRight =
    detail.direction === 'unknown' ? BANDS.pipe + drawing.pipeWidth / 2 : BANDS.pipe + drawing.pipeWidth;
  // Under the sentence about the blend, above the return.
  const fifth = { x: pipeRight + 36, y: middle - (reverse ? 26 : 36) };
  const edges = [
    { y: BANDS.top, left: true, right: true },
    { y: drawing.supplyLeft, left: true, right: false },
    { y: drawing.returnLeft, left: true, right: false },
    { y: drawing.supplyRight, left: false, right: true },
    { y: drawing.returnRight, left: false, right: true },
    { y: BANDS.bottom, left: true, right: true },
  ];
  return (
    <svg
      role="group"
      aria-label={teeSentence(detail, drawing.crossingShare, print)}
      viewBox={`0 0 ${SIZE.width} ${SIZE.height}`}
      width="100%"
      className="block overflow-visible"
    >
      <g stroke="var(--ink)" strokeWidth="1" strokeDasharray="1.5 3">
        {edges.map(({ y, left, right }) => (
          <g key={`${y} ${left}`}>
            {left ? <line x1="100" x2={BANDS.left} y1={y} y2={y} /> : null}
            {right ? <line x1={BANDS.right} x2="754" y1={y} y2={y} /> : null}
          </g>
        ))}
      </g>
      <TeePipes
        drawing={drawing}
        valve={
          arrangement === 'variable-primary'
            ? { x: BANDS.pipe + drawing.pipeWidth / 2, y: (drawing.supplyLeft + drawing.returnLeft) / 2 - 30 }
            : undefined
        }
      />
      <text x="0" y={BANDS.top - 6} fontSize="12" fontWeight="600" fill="var(--ink)">
        production side
      </text>
      <text x={SIZE.width - 1} y={BANDS.top - 6} fontSize="12" fontWeight="600" textAnchor="end" fill="var(--ink)">
        distribution side
      </text>
      <TeeUnits units={units} running={detail.unitsRunning} top={BANDS.top + 10} bottom={BANDS.bottom} />
      <TeeBuildings x={768.5} top={BANDS.top} bottom={BANDS.bottom} loadTons={detail.hour.loadTons} />
      {crossing === null ? null : (
        <text
          x={reverse ? BANDS.right : BANDS.left}
          y={reverse ? drawing.supplyRight + 18 : drawing.returnLeft - 9}
          fontSize="12"
          fontWeight="600"
          textAnchor={reverse ? 'end' : 'start'}
          fill={reverse ? 'var(--rev)' : 'var(--fwd)'}
        >
          {crossing}
        </text>
      )}
      {STATIONS.map(({ station, number, label }) => {
        const pipe = station === 'common-pipe';
        const place = pipe ? fifth : PLACES[station];
        return (
          <TeeStation
            key={station}
            {...place}
            number={number}
            label={pipe ? `${label}, ${detail.direction}` : label}
            figures={stationFigures(stationOf(detail, station), pipe, print)}
            doubtTemp={isDoubted(station, 'temperature')}
            doubtFlow={isDoubted(station, 'flow')}
          />
        );
      })}
      <line x1={pipeRight + 3} x2={fifth.x - 3} y1={fifth.y + 8} y2={fifth.y + 8} stroke="var(--ink)" />
      {expectedBridgeGpm === undefined ? null : (
        <BridgeTick
          x={BANDS.pipe}
          y={drawing.returnLeft - 24}
          widthPx={expectedBridgeGpm * pxPerGpm}
          words={`expected up to ${print.with(print.flow(expectedBridgeGpm), 'flow')}`}
        />
      )}
      <ScaleBar pxPerGpm={pxPerGpm} />
    </svg>
  );
}

/** How wide the pipe of a bridge is meant to become: a measure laid across it. */
function BridgeTick({ x, y, widthPx, words }: { x: number; y: number; widthPx: number; words: string }) {
  return (
    <g>
      <path d={`M${x} ${y - 4}v8M${x} ${y}h${widthPx}M${x + widthPx} ${y - 4}v8`} stroke="var(--ink)" fill="none" />
      <text x={x - 8} y={y + 4} fontSize="11" textAnchor="end" fill="var(--ink2)">
        {words}
      </text>
    </g>
  );
}

function ScaleBar({ pxPerGpm }: { pxPerGpm: number }) {
  const print = useFormat();
  const flowGpm = [100, 200, 500, 1000, 2000, 5000, 10_000].find((step) => step * pxPerGpm >= 24) ?? 10_000;
  const width = flowGpm * pxPerGpm;
  return (
    <g>
      <path d={`M0.5 511v8M0.5 515h${width}M${width + 0.5} 511v8`} stroke="var(--ink)" fill="none" />
      <text x={width + 9} y="519" fontSize="11" fill="var(--ink2)">
        {print.with(print.flow(flowGpm), 'flow')}
      </text>
    </g>
  );
}
