'use client';
import { Table2 } from 'lucide-react';
import { useCallback, useMemo, useState, type KeyboardEvent } from 'react';
import type uPlot from 'uplot';
import { DirectionMark } from '@/components/marks/direction-mark';
import { LineSwatch } from '@/components/marks/ink-swatches';
import { useFormat, useUnits } from '@/components/shell/units-context';
import { TextButton } from '@/components/ui/button';
import { Section } from '@/components/ui/section';
import { Stale } from '@/components/ui/states';
import { formatNumber, toPrinted, unitLabel } from '@/lib/client/format';
import { formatDayTime } from '@/lib/client/format-time';
import { ChartTable } from './chart-table';
import { drawScatter } from './draw-scatter';
import { PlotCanvas, type Painter } from './plot-canvas';
import { nearestPoint, planeLimits, type ScatterPoint } from './scatter-points';
import { niceTicks } from './scales';
import { useTimeView, useTimeViewState } from './time-view';

export interface FlowLine {
  loadTons: number;
  flowGpm: number;
}
export interface LoadFlowScatterProps {
  points: readonly ScatterPoint[];
  fromMs: number;
  toMs: number;
  timeZone: string;
  /** What a healthy plant would need at each load, by rising load; omitted where it is not known. */
  expected?: readonly FlowLine[];
  designDeltaTF?: number;
  /** Production flow with 1, 2, ... units running. */
  unitFlowsGpm?: readonly number[];
  stale?: boolean;
  /** What one mark is, where the bars are not hours. */
  sub?: string;
  /** The hours inside a dragged rectangle; an empty list when the selection is cleared. */
  onBrush?: (startsMs: number[]) => void;
}

const HEIGHT_PX = 326;
/** The name of the upright axis stands at its top left; a line so near goes to the right. */
const AXIS_NAME_PX = 32;
/** gpm per ton at 1 deg F of delta-T: 12,000 Btu/h over 500 Btu/h per gpm and deg F, the trade's rounded factor. */
const GPM_DEGF_PER_TON = 24;

/** Load against distribution flow, one mark an hour: above a unit's line an hour has to be reverse. */
export function LoadFlowScatter(props: LoadFlowScatterProps) {
  const { points, timeZone, stale = false, sub = 'one mark an hour' } = props;
  const [asTable, setAsTable] = useState(false);
  const toggle = () => setAsTable((before) => !before);
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key === 't' && !event.ctrlKey && !event.metaKey && !event.altKey) toggle();
  };
  return (
    <Section
      title="Load against flow"
      sub={sub}
      aside={
        <TextButton onClick={toggle} aria-pressed={asTable}>
          <Table2 size={16} strokeWidth={1.5} aria-hidden="true" className="mr-1 inline align-[-3px]" />
          {asTable ? 'drawing' : 'table'}
        </TextButton>
      }
    >
      <div onKeyDown={onKeyDown}>
        {asTable ? (
          <ScatterTable points={points} timeZone={timeZone} />
        ) : (
          <Stale stale={stale}>
            <Plane {...props} />
          </Stale>
        )}
      </div>
    </Section>
  );
}

function Plane(props: LoadFlowScatterProps) {
  const { points, fromMs, toMs, timeZone, expected, designDeltaTF, unitFlowsGpm = NO_FLOWS, onBrush } = props;
  const { units } = useUnits();
  const view = useTimeView({ fromMs, toMs });
  const cursorMs = useTimeViewState(view, (state) => state.cursorMs);
  const chosen = useMemo(
    () => (cursorMs === null ? null : (points.find((point) => point.atMs === cursorMs) ?? null)),
    [points, cursorMs],
  );
  const { load, flow } = useMemo(() => planeLimits(points, unitFlowsGpm), [points, unitFlowsGpm]);
  const data = useMemo<uPlot.AlignedData>(
    () => [points.map((point) => point.loadTons), points.map((point) => point.flowGpm)],
    [points],
  );
  const design = useMemo(
    () =>
      designDeltaTF === undefined
        ? undefined
        : load.map((loadTons) => ({ loadTons, flowGpm: (GPM_DEGF_PER_TON * loadTons) / designDeltaTF })),
    [designDeltaTF, load],
  );
  const ticks = useMemo(() => axisTicks(load, flow, units), [load, flow, units]);
  const draw = useCallback(
    (painter: Painter) => drawScatter(painter, { points, expected, design, unitFlowsGpm, chosen, ticks }),
    [points, expected, design, unitFlowsGpm, chosen, ticks],
  );
  const [widthPx, setWidthPx] = useState(530);
  const x = (loadTons: number) => ((loadTons - load[0]) / (load[1] - load[0])) * widthPx;
  const y = (flowGpm: number) => ((flow[1] - flowGpm) / (flow[1] - flow[0])) * HEIGHT_PX;
  const near = (atX: number, atY: number) =>
    nearestPoint(points, (point) => [x(point.loadTons), y(point.flowGpm)], [x(atX), y(atY)]);
  const reverse = points.filter((point) => point.direction === 'reverse').length;
  return (
    <div
      tabIndex={0}
      role="img"
      aria-label={`Distribution flow against load, ${points.length} hours, ${reverse} of them reverse. t shows them as a table.`}
      className="grid grid-cols-[48px_minmax(0,1fr)] text-micro text-ink-2"
    >
      <div aria-hidden="true" className="relative">
        {ticks.flow.map(({ label, value }) => (
          <span key={label} className="absolute right-2 -translate-y-1/2" style={{ top: y(value) }}>
            {label}
          </span>
        ))}
      </div>
      <div className="relative min-w-0">
        <PlotCanvas
          data={data}
          xLimits={load}
          yLimits={flow}
          heightPx={HEIGHT_PX}
          draw={draw}
          brush
          onMove={(at) => {
            const point = at === null ? null : near(at.x, at.y);
            if (point !== null) view.moveCursor(point.atMs, 'pointer');
          }}
          onPick={(atX, atY) => {
            const point = near(atX, atY);
            if (point !== null) view.pin(point.atMs);
          }}
          onSelect={(xs, ys) =>
            onBrush?.(
              points
                .filter(({ loadTons, flowGpm }) => within(loadTons, xs) && within(flowGpm, ys))
                .map((point) => point.startMs),
            )
          }
          onBack={() => onBrush?.([])}
          onWidth={setWidthPx}
        />
        <PlaneWords {...{ x, y, flow, chosen, unitFlowsGpm, timeZone, widthPx }} />
      </div>
      <div aria-hidden="true" className="relative col-start-2 h-9">
        {ticks.load.map(({ label, value }) => (
          <span key={label} className="absolute -translate-x-1/2 pt-1.5" style={{ left: x(value) }}>
            {label}
          </span>
        ))}
        <span className="absolute right-0 bottom-0">load, {unitLabel('load', units)}</span>
      </div>
      <LineKey expected={expected !== undefined} designDeltaTF={designDeltaTF} />
    </div>
  );
}

const NO_FLOWS: readonly number[] = [];
const within = (value: number, [lo, hi]: readonly [number, number]) => value >= lo && value <= hi;

export interface AxisTicks {
  load: { label: string; value: number }[];
  flow: { label: string; value: number }[];
}

function axisTicks(load: [number, number], flow: [number, number], units: 'ip' | 'si'): AxisTicks {
  const ticks = ([lo, hi]: [number, number], quantity: 'load' | 'flow') => {
    const per = toPrinted(1, quantity, units);
    return niceTicks(lo * per, hi * per).map((tick) => ({ label: formatNumber(tick), value: tick / per }));
  };
  return { load: ticks(load, 'load'), flow: ticks(flow, 'flow') };
}

interface PlaneWordsProps extends Pick<LoadFlowScatterProps, 'timeZone'> {
  x: (loadTons: number) => number;
  y: (flowGpm: number) => number;
  flow: [number, number];
  chosen: ScatterPoint | null;
  unitFlowsGpm: readonly number[];
  widthPx: number;
}

function PlaneWords(props: PlaneWordsProps) {
  const { x, y, flow, chosen, unitFlowsGpm, timeZone, widthPx } = props;
  const print = useFormat();
  // Lines of unit flow carry their words where fewest marks are: the last at the left, the lowest at the right.
  const lines = unitFlowsGpm
    .map((flowGpm, index) => ({ flowGpm, count: index + 1 }))
    .filter((line) => line.flowGpm > flow[0] && line.flowGpm < flow[1]);
  const left = chosen === null ? 0 : x(chosen.loadTons);
  return (
    <div aria-hidden="true" className="pointer-events-none absolute inset-0">
      <span className="absolute top-0 left-1.5">distribution flow, {print.unit('flow')}</span>
      {lines.map(({ flowGpm, count }, index) => (
        <span
          key={count}
          className={`absolute -translate-y-full ${(index === 0 && lines.length > 1) || y(flowGpm) < AXIS_NAME_PX ? 'right-0' : 'left-1.5'}`}
          style={{ top: y(flowGpm) - 1 }}
        >
          {count} {count === 1 ? 'unit' : 'units'} running, {print.flow(flowGpm)}
        </span>
      ))}
      {chosen === null ? null : (
        <span
          className="absolute font-semibold whitespace-nowrap text-ink"
          style={
            left > widthPx / 2
              ? { right: widthPx - left + 12, top: y(chosen.flowGpm) - 16 }
              : { left: left + 12, top: y(chosen.flowGpm) - 16 }
          }
        >
          {formatDayTime(chosen.startMs, timeZone)}
        </span>
      )}
    </div>
  );
}

/** The two lines, named under the plot where no mark can lie. */
function LineKey({ expected, designDeltaTF }: { expected: boolean; designDeltaTF?: number }) {
  const print = useFormat();
  return (
    <ul aria-hidden="true" className="col-start-2 flex flex-wrap gap-x-6 text-small">
      {expected ? (
        <li className="flex items-center gap-2 font-semibold text-ink">
          <LineSwatch strong /> expected at the load
        </li>
      ) : null}
      {designDeltaTF === undefined ? null : (
        <li className="flex items-center gap-2">
          <LineSwatch broken /> design, {print.with(print.deltaT(designDeltaTF), 'temperatureDifference')}
        </li>
      )}
    </ul>
  );
}

function ScatterTable({ points, timeZone }: Pick<LoadFlowScatterProps, 'points' | 'timeZone'>) {
  const print = useFormat();
  return (
    <ChartTable
      caption="Load and distribution flow, one row an hour, by rising load"
      head={[
        { label: 'hour' },
        { label: 'direction' },
        { label: `load, ${print.unit('load')}`, numeric: true },
        { label: `flow, ${print.unit('flow')}`, numeric: true },
      ]}
      rows={points.map((point) => ({
        key: point.startMs,
        cells: [
          formatDayTime(point.startMs, timeZone),
          <span key="direction" className="whitespace-nowrap">
            <DirectionMark direction={point.direction} /> {point.direction}
          </span>,
          print.load(point.loadTons),
          print.flow(point.flowGpm),
        ],
      }))}
    />
  );
}
