'use client';
import { useCallback, useEffect, useMemo, useState } from 'react';
import { useUnits } from '@/components/shell/units-context';
import { formatQuantity, toPrinted, unitLabel } from '@/lib/client/format';
import type uPlot from 'uplot';
import { CursorLine } from './cursor-line';
import { drawEmptyStill, drawFence, drawGrid, drawTide } from './draw-tide';
import { PlotCanvas, type Limits, type Painter } from './plot-canvas';
import { niceTicks, tickLabel } from './scales';
import { TimeHeads } from './time-heads';
import type { TimeColumn } from './time-columns';
import { zoomAt } from './tide-keys';
import { dataGaps, markAt, type Extent, type TideMark } from './tide-marks';
import { useTimeViewState, type TimeView } from './time-view';

/** Words at a stretch of the strip: why it is unknown, what was done. */
export interface TideNote {
  fromMs: number;
  toMs: number;
  words: string;
}

export interface TidePlotProps {
  marks: readonly TideMark[];
  extent: Extent;
  columns: readonly TimeColumn[];
  verticals: readonly { startMs: number; opensDay: boolean }[];
  view: TimeView;
  leastMs: number;
  heightPx: number;
  notes: readonly TideNote[];
  pending: TideNote | null;
  /** Said on the empty frame: "reading 336 hours". */
  frameWords?: string;
  onWidth: (widthPx: number) => void;
}

/** The strip's drawing: heads, axis, canvas, words at the right. */
export function TidePlot(props: TidePlotProps) {
  const { marks, extent, columns, verticals, view, leastMs, heightPx, notes, pending, frameWords, onWidth } = props;
  const { units } = useUnits();
  const range = useTimeViewState(view, (state) => state.range);
  const xLimits: Limits = useMemo(() => [range.fromMs, range.toMs], [range]);
  const yLimits: Limits = useMemo(() => [extent.loGpm, extent.hiGpm], [extent]);
  const data = useMemo<uPlot.AlignedData>(
    () => [marks.map((mark) => mark.startMs), marks.map((mark) => mark.forwardGpm + mark.reverseGpm)],
    [marks],
  );
  // Round numbers of the reader's own unit, at their places in gpm.
  const ticks = useMemo(() => {
    const perGpm = toPrinted(1, 'flow', units);
    // Before there are data the scale means nothing: the still line alone.
    if (marks.length === 0) return [0];
    return niceTicks(extent.loGpm * perGpm, extent.hiGpm * perGpm).map((tick) => tick / perGpm);
  }, [extent, units, marks]);
  const draw = useCallback(
    (painter: Painter) => {
      drawGrid(
        painter,
        ticks.filter((tick) => tick !== 0),
        verticals,
      );
      if (marks.length === 0) drawEmptyStill(painter);
      else drawTide(painter, marks);
      if (pending !== null) drawFence(painter, { startMs: pending.fromMs, endMs: pending.toMs });
    },
    [marks, ticks, verticals, pending],
  );
  const atX = (epochMs: number) => `${((epochMs - range.fromMs) / (range.toMs - range.fromMs)) * 100}%`;
  const atY = (flowGpm: number) => `${((extent.hiGpm - flowGpm) / (extent.hiGpm - extent.loGpm)) * 100}%`;
  const snap = (epochMs: number) => {
    const mark = markAt(marks, epochMs);
    return mark === null ? null : (mark.startMs + mark.endMs) / 2;
  };
  const wheel = useWheelZoom(view, leastMs);
  return (
    <div className="grid grid-cols-[64px_minmax(0,1fr)_124px]">
      <div className="col-start-2">
        <TimeHeads columns={columns} view={view} pannable />
      </div>
      <FlowAxis ticks={ticks} atY={atY} className="col-start-1 row-start-2" />
      <div ref={wheel} className="relative col-start-2 row-start-2">
        <PlotCanvas
          data={data}
          xLimits={xLimits}
          yLimits={yLimits}
          heightPx={heightPx}
          draw={draw}
          onMove={(at) => {
            const centre = at === null ? null : snap(at.x);
            if (centre !== null) view.moveCursor(centre, 'pointer');
          }}
          onPick={(epochMs) => {
            const centre = snap(epochMs);
            if (centre !== null) view.pin(centre);
          }}
          onSelect={([fromMs, toMs]) => view.zoom({ fromMs, toMs }, leastMs)}
          onBack={view.back}
          onWidth={onWidth}
        />
        <CursorLine view={view} />
        <StripWords marks={marks} extent={extent} range={range} notes={notes} pending={pending} atX={atX} atY={atY} />
        {frameWords === undefined ? null : (
          <p className="absolute left-2 -translate-y-full pb-2 text-small text-ink-2 italic" style={{ top: atY(0) }}>
            {frameWords}
          </p>
        )}
      </div>
      <SideWords atY={atY} extent={extent} />
    </div>
  );
}

function FlowAxis(props: { ticks: readonly number[]; atY: (flowGpm: number) => string; className: string }) {
  const { units } = useUnits();
  const top = Math.max(...props.ticks);
  return (
    <div aria-hidden="true" className={`relative text-micro text-ink-2 ${props.className}`}>
      {props.ticks.map((tick) => (
        <span
          key={tick}
          className={`absolute right-2 -translate-y-1/2 ${tick === 0 ? 'font-semibold text-ink' : ''}`}
          style={{ top: props.atY(tick) }}
        >
          {tick === 0 ? 'still' : tickLabel(tick, units)}
        </span>
      ))}
      {top > 0 ? (
        <span className="absolute left-0 -translate-y-1/2" style={{ top: props.atY(top) }}>
          {unitLabel('flow', units)}
        </span>
      ) : null}
    </div>
  );
}

function SideWords({ atY, extent }: { atY: (flowGpm: number) => string; extent: Extent }) {
  const words = [
    { name: 'forward', means: ['surplus: supply', 'water crosses over'], at: extent.hiGpm * 0.48, ink: 'text-fwd' },
    { name: 'reverse', means: ['deficit: return', 'water comes back'], at: extent.loGpm * 0.5, ink: 'text-rev' },
  ];
  return (
    <div aria-hidden="true" className="relative col-start-3 row-start-2 ml-3 text-micro text-ink-2">
      {words.map(({ name, means, at, ink }) => (
        <p key={name} className="absolute -translate-y-1/2" style={{ top: atY(at) }}>
          <b className={ink}>{name}</b>
          {means.map((line) => (
            <span key={line} className="block whitespace-nowrap">
              {line}
            </span>
          ))}
        </p>
      ))}
    </div>
  );
}

interface StripWordsProps extends Pick<TidePlotProps, 'marks' | 'extent' | 'notes' | 'pending'> {
  range: { fromMs: number; toMs: number };
  atX: (epochMs: number) => string;
  atY: (flowGpm: number) => string;
}

/** Smallest share of the range in view whose gap is worth a label, and how many labels there may be. */
const GAP_SHARE = 0.006;
const MOST_GAPS = 3;

/** Text on the plot: gaps, notes, what is pending, figures of bars that are cut flat. */
function StripWords({ marks, extent, range, notes, pending, atX, atY }: StripWordsProps) {
  const length = range.toMs - range.fromMs;
  const inView = (span: { startMs: number; endMs: number }) => span.endMs > range.fromMs && span.startMs < range.toMs;
  const gaps =
    marks.length === 0
      ? []
      : dataGaps(marks, range.fromMs, range.toMs)
          .filter((gap) => (gap.endMs - gap.startMs) / length > GAP_SHARE)
          .filter((gap) => pending === null || gap.endMs <= pending.fromMs || gap.startMs >= pending.toMs)
          .sort((left, right) => right.endMs - right.startMs - (left.endMs - left.startMs))
          .slice(0, MOST_GAPS);
  const cut = marks.filter(
    (mark) => inView(mark) && (mark.forwardGpm > extent.hiGpm || mark.reverseGpm < extent.loGpm),
  );
  return (
    <div className="pointer-events-none absolute inset-0 overflow-hidden text-micro text-ink-2">
      {gaps.map((gap) => (
        <NoData key={gap.startMs} left={atX((gap.startMs + gap.endMs) / 2)} bottom={atY(0)} />
      ))}
      {notes
        .filter((note) => inView({ startMs: note.fromMs, endMs: note.toMs }))
        .map((note) => (
          <p
            key={note.fromMs}
            className="absolute max-w-37 bg-paper/0 italic"
            style={{ left: `calc(${atX(note.toMs)} + 6px)`, bottom: '6%' }}
          >
            {note.words}
          </p>
        ))}
      {pending === null ? null : (
        <p
          className="absolute -translate-y-full pb-2 text-small italic"
          style={{ left: `calc(${atX(pending.fromMs)} + 8px)`, top: atY(0) }}
        >
          {pending.words}
        </p>
      )}
      {cut.map((mark) => (
        <CutFigure key={mark.index} mark={mark} left={atX((mark.startMs + mark.endMs) / 2)} />
      ))}
    </div>
  );
}

function NoData({ left, bottom }: { left: string; bottom: string }) {
  return (
    <div className="absolute top-[6%]" style={{ left, height: `calc(${bottom} - 6% - 4px)` }}>
      <p className="-translate-x-1/2 italic whitespace-nowrap">no data</p>
      <span className="absolute top-4 bottom-0 left-0 w-px bg-ink-3" />
    </div>
  );
}

function CutFigure({ mark, left }: { mark: TideMark; left: string }) {
  const { units } = useUnits();
  const up = mark.forwardGpm > -mark.reverseGpm;
  return (
    <span
      className={`absolute bg-paper px-0.5 font-semibold text-ink ${up ? 'top-0' : 'bottom-0'}`}
      style={{ left: `calc(${left} + 4px)` }}
    >
      {formatQuantity(up ? mark.forwardGpm : mark.reverseGpm, 'flow', units, 'always')}
    </span>
  );
}

/** Wheel with Ctrl zooms at the pointer; without it the page scrolls as everywhere. */
function useWheelZoom(view: TimeView, leastMs: number): (element: HTMLDivElement | null) => void {
  const [element, setElement] = useState<HTMLDivElement | null>(null);
  useEffect(() => {
    if (element === null) return;
    const onWheel = (event: WheelEvent) => {
      if (!event.ctrlKey) return;
      event.preventDefault();
      const { left, width } = element.getBoundingClientRect();
      const { fromMs, toMs } = view.get().range;
      const at = fromMs + ((event.clientX - left) / width) * (toMs - fromMs);
      zoomAt(view, at, event.deltaY < 0 ? 0.8 : 1.25, leastMs);
    };
    // React's own wheel listeners are passive and could not keep the browser from zooming the page.
    element.addEventListener('wheel', onWheel, { passive: false });
    return () => element.removeEventListener('wheel', onWheel);
  }, [element, view, leastMs]);
  return setElement;
}
