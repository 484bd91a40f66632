'use client';
import { useEffect, useRef } from 'react';
import uPlot from 'uplot';
import { canvasPattern, type PatternKind } from './canvas-patterns';
import { usePalette, type Palette } from './palette';

/** What a drawing function gets: a context in CSS pixels with its origin at the plot's corner, and the two scales. */
export interface Painter {
  context: CanvasRenderingContext2D;
  widthPx: number;
  heightPx: number;
  palette: Palette;
  ratio: number;
  x: (value: number) => number;
  y: (value: number) => number;
  pattern: (kind: PatternKind) => CanvasPattern | string;
}

export type Limits = readonly [number, number];

export interface PlotCanvasProps {
  /** First column x, ascending; the rest are what the cursor may land on. */
  data: uPlot.AlignedData;
  xLimits: Limits;
  yLimits: Limits;
  heightPx: number;
  /** Draws everything; called whenever data, limits, size, theme or pixel ratio change. */
  draw: (painter: Painter) => void;
  /** Value of x under the pointer and its place in px; null when it leaves. */
  onMove?: (at: { x: number; y: number; leftPx: number; topPx: number } | null) => void;
  onPick?: (x: number, y: number) => void;
  /** A dragged stretch (and, with `brush`, its y limits too). */
  onSelect?: (x: Limits, y: Limits) => void;
  onBack?: () => void;
  onWidth?: (widthPx: number) => void;
  /** Drag selects a rectangle in place of a stretch of x. */
  brush?: boolean;
}

const LEAST_DRAG_PX = 5;

/** Owns one uPlot: its scales, canvas, pointer and selection. Axes, labels and readings are the page's own text. */
export function PlotCanvas(props: PlotCanvasProps) {
  const host = useRef<HTMLDivElement>(null);
  const plot = useRef<uPlot | null>(null);
  const latest = useRef(props);
  const palette = usePalette();
  const inks = useRef(palette);
  useEffect(() => {
    latest.current = props;
    inks.current = palette;
  });

  useEffect(() => {
    const element = host.current;
    if (element === null) return;
    const observer = new ResizeObserver(([entry]) => {
      const widthPx = Math.floor(entry?.contentRect.width ?? 0);
      // Hidden (the phone's view shows another drawing): nothing to draw on.
      if (widthPx === 0) return;
      if (plot.current === null) plot.current = makePlot(element, widthPx, latest, inks);
      else if (plot.current.width !== widthPx)
        plot.current.setSize({ width: widthPx, height: latest.current.heightPx });
      latest.current.onWidth?.(widthPx);
    });
    observer.observe(element);
    return () => {
      observer.disconnect();
      plot.current?.destroy();
      plot.current = null;
    };
  }, []);

  const { data, heightPx, draw } = props;
  const [xMin, xMax] = props.xLimits;
  const [yMin, yMax] = props.yLimits;
  useEffect(() => {
    plot.current?.setData(data, true);
  }, [data, xMin, xMax, yMin, yMax]);
  useEffect(() => {
    plot.current?.redraw(false, false);
  }, [draw, palette]);
  useEffect(() => {
    if (plot.current !== null && plot.current.height !== heightPx) {
      plot.current.setSize({ width: plot.current.width, height: heightPx });
    }
  }, [heightPx]);

  return <div ref={host} style={{ height: heightPx }} className="min-w-0 overflow-hidden" />;
}

function makePlot(
  element: HTMLElement,
  widthPx: number,
  latest: { readonly current: PlotCanvasProps },
  inks: { readonly current: Palette | null },
): uPlot {
  const { data, heightPx, brush = false } = latest.current;
  const paint = (plot: uPlot) => {
    const palette = inks.current;
    if (palette === null) return;
    const ratio = uPlot.pxRatio;
    const { ctx: context, bbox } = plot;
    context.save();
    context.beginPath();
    context.rect(bbox.left, bbox.top, bbox.width, bbox.height);
    context.clip();
    context.translate(bbox.left, bbox.top);
    context.scale(ratio, ratio);
    latest.current.draw({
      context,
      widthPx: bbox.width / ratio,
      heightPx: bbox.height / ratio,
      palette,
      ratio,
      x: (value) => plot.valToPos(value, 'x'),
      y: (value) => plot.valToPos(value, 'y'),
      pattern: (kind) => canvasPattern(context, kind, palette, ratio),
    });
    context.restore();
  };
  const plot = new uPlot(
    {
      width: widthPx,
      height: heightPx,
      padding: [0, 0, 0, 0],
      legend: { show: false },
      axes: [{ show: false }, { show: false }],
      scales: {
        x: { time: false, range: () => [...latest.current.xLimits] as [number, number] },
        y: { range: () => [...latest.current.yLimits] as [number, number] },
      },
      series: data.map((_, index) => (index === 0 ? {} : { paths: () => null, points: { show: false } })),
      cursor: {
        x: false,
        y: false,
        points: { show: false },
        drag: { x: true, y: brush, setScale: false, dist: LEAST_DRAG_PX },
        bind: {
          dblclick: () => () => {
            latest.current.onBack?.();
            return null;
          },
        },
      },
      hooks: {
        draw: [paint],
        setCursor: [
          (self) => {
            const { left = -1, top = -1 } = self.cursor;
            latest.current.onMove?.(
              left < 0 ? null : { x: self.posToVal(left, 'x'), y: self.posToVal(top, 'y'), leftPx: left, topPx: top },
            );
          },
        ],
        setSelect: [
          (self) => {
            const { left, top, width, height } = self.select;
            if (width < LEAST_DRAG_PX) return;
            self.setSelect({ left: 0, top: 0, width: 0, height: 0 }, false);
            latest.current.onSelect?.(
              [self.posToVal(left, 'x'), self.posToVal(left + width, 'x')],
              [self.posToVal(top + height, 'y'), self.posToVal(top, 'y')],
            );
          },
        ],
      },
    },
    data,
    element,
  );
  plot.over.addEventListener('click', (event) => {
    const { left, top } = plot.over.getBoundingClientRect();
    latest.current.onPick?.(plot.posToVal(event.clientX - left, 'x'), plot.posToVal(event.clientY - top, 'y'));
  });
  return plot;
}
