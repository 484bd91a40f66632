'use client';
import { Table2 } from 'lucide-react';
import { useEffect, useId, useMemo, useRef, useState, type KeyboardEvent, type ReactNode } from 'react';
import { useFormat } from '@/components/shell/units-context';
import { TextButton } from '@/components/ui/button';
import { ArrowKeyCap, KeyCap } from '@/components/ui/key-cap';
import { SectionHead } from '@/components/ui/section';
import { Stale } from '@/components/ui/states';
import type { PlantDay, Tide } from '@/lib/schemas/results';
import { TideDataTable } from './tide-data-table';
import { tideKey } from './tide-keys';
import { TideLegend } from './tide-legend';
import { markAt, tideExtent, tideMarks } from './tide-marks';
import { TidePlot, type TideNote } from './tide-plot';
import { TideReading } from './tide-reading';
import { TideRows } from './tide-rows';
import { TideSummary } from './tide-summary';
import { tideTable } from './tide-table';
import { barSentence, deepestReverse, stripSentence } from './tide-words';
import { columnLevel, gridLines, timeColumns } from './time-columns';
import { useTimeView, useTimeViewState, type TimeView } from './time-view';
import { useThrottled } from './use-throttled';

export interface TideStripProps {
  /** null while it is read, or before there are data: the frame and the still line are drawn all the same. */
  tide: Tide | null;
  /** The period of the page; needed for the frame before the tide is there. */
  fromMs: number;
  toMs: number;
  timeZone: string;
  /** The days' own records, for exact figures under day columns. */
  days?: readonly PlantDay[];
  notes?: readonly TideNote[];
  /** A stretch that is still being worked out. */
  pending?: TideNote | null;
  frameWords?: string;
  stale?: boolean;
  hourHref?: (hourStart: string) => string;
  /** The period picker; stands at the left of the line over the strip. */
  controls?: ReactNode;
  /** The least flow a side of the drawing is worth, so that noise around zero stays small: a twentieth of design flow. */
  floorGpm?: number;
}

const PLOT_HEIGHT_PX = 268;
const WIDTH_AT_FIRST_PX = 1156;
const NOTHING: readonly never[] = [];

/**
 * Bypass flow around the still line: above it production water crosses over, below it return water comes back. On a
 * phone one day a row. Shares range and cursor with the other charts of a `TimeViewProvider`.
 */
export function TideStrip(props: TideStripProps) {
  const { tide, fromMs, toMs, timeZone, controls, stale = false, hourHref, floorGpm } = props;
  const view = useTimeView({ fromMs, toMs });
  const print = useFormat();
  const [asTable, setAsTable] = useState(false);
  const marks = useMemo(() => (tide === null ? NOTHING : tideMarks(tide)), [tide]);
  const extent = useMemo(() => tideExtent(marks, floorGpm), [marks, floorGpm]);
  const deepest = useMemo(() => deepestReverse(marks), [marks]);
  useEffect(() => {
    // The reading begins at the extreme: it is what the lead sentence is about.
    if (deepest !== null && view.get().cursorMs === null) {
      view.moveCursor((deepest.startMs + deepest.endMs) / 2, 'key');
    }
  }, [deepest, view]);
  const link = useRef<HTMLAnchorElement>(null);
  const sentence =
    tide === null
      ? 'Bypass flow around the still line; nothing to draw yet.'
      : stripSentence(tide, marks, timeZone, print);
  const leastMs = (tide?.barMinutes ?? 60) * 60_000 * 8;
  const toggle = () => setAsTable((before) => !before);
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    const onOpen = () => link.current?.click();
    if (tideKey(event, { view, marks, leastMs, onOpen, onToggleTable: toggle })) event.preventDefault();
  };
  return (
    <section aria-label="Tide strip">
      <div className="mb-4 flex flex-wrap items-center justify-between gap-x-6 gap-y-2">
        {controls ?? <span />}
        <Hints asTable={asTable} onTable={toggle} />
      </div>
      <SectionHead
        title="Tide strip"
        sub={
          <>
            <span className="phone:hidden">bypass flow around the still line</span>
            <span className="hidden phone:inline">one day a row</span>
          </>
        }
        aside={
          tide === null || asTable ? undefined : (
            <div className="phone:hidden">
              <Reading tide={tide} timeZone={timeZone} hourHref={hourHref} view={view} marks={marks} linkRef={link} />
            </div>
          )
        }
      />
      {asTable && tide !== null ? (
        <div onKeyDown={(event) => (event.key === 't' ? toggle() : undefined)}>
          <TideDataTable tide={tide} timeZone={timeZone} />
        </div>
      ) : (
        <Stale stale={stale}>
          <Strip
            {...props}
            view={view}
            marks={marks}
            extent={extent}
            label={sentence}
            onKeyDown={onKeyDown}
            leastMs={leastMs}
          />
          <div className="hidden phone:block">
            <TideRows
              tide={tide}
              marks={marks}
              extent={extent}
              fromMs={fromMs}
              toMs={toMs}
              timeZone={timeZone}
              hourHref={hourHref}
              label={sentence}
              view={view}
            />
          </div>
          <TideLegend />
        </Stale>
      )}
    </section>
  );
}

interface StripProps extends TideStripProps {
  view: TimeView;
  marks: ReturnType<typeof tideMarks> | readonly never[];
  extent: ReturnType<typeof tideExtent>;
  label: string;
  leastMs: number;
  onKeyDown: (event: KeyboardEvent) => void;
}

function Strip(props: StripProps) {
  const { tide, timeZone, days = NOTHING, notes = NOTHING, pending = null, frameWords } = props;
  const { view, marks, extent, label, leastMs, onKeyDown } = props;
  const [widthPx, setWidthPx] = useState(WIDTH_AT_FIRST_PX);
  const range = useTimeViewState(view, (state) => state.range);
  const level = columnLevel(range.fromMs, range.toMs, widthPx);
  const columns = useMemo(() => timeColumns(range.fromMs, range.toMs, timeZone, level), [range, timeZone, level]);
  const verticals = useMemo(() => gridLines(columns, level, timeZone), [columns, level, timeZone]);
  const cells = useMemo(
    () => tideTable(tide?.bars ?? NOTHING, columns, timeZone, days),
    [tide, columns, timeZone, days],
  );
  const helpId = useId();
  return (
    <div className="phone:hidden">
      <div role="application" tabIndex={0} aria-label={label} aria-describedby={helpId} onKeyDown={onKeyDown}>
        <TidePlot
          marks={marks}
          extent={extent}
          columns={columns}
          verticals={verticals}
          view={view}
          leastMs={leastMs}
          heightPx={PLOT_HEIGHT_PX}
          notes={notes}
          pending={pending}
          frameWords={frameWords}
          onWidth={setWidthPx}
        />
        <Announcer tide={tide} timeZone={timeZone} view={view} marks={marks} />
      </div>
      <p id={helpId} className="sr-only">
        Left and right move one bar, with Shift one day. Plus and minus zoom. n and p go to the next and previous
        reverse stretch. Enter opens the hour. t shows the numbers as a table.
      </p>
      <TideSummary columns={columns} cells={cells} widthPx={widthPx} />
    </div>
  );
}

function Hints({ asTable, onTable }: { asTable: boolean; onTable: () => void }) {
  return (
    <p className="flex items-center gap-2 text-ink-2">
      <span className="inline-flex items-center gap-1.5 phone:hidden">
        Drag to zoom · <ArrowKeyCap to="left" /> <ArrowKeyCap to="right" /> move · <KeyCap>+</KeyCap> <KeyCap>−</KeyCap>{' '}
        zoom ·
      </span>
      <TextButton onClick={onTable} aria-pressed={asTable}>
        <Table2 size={16} strokeWidth={1.5} aria-hidden="true" className="mr-1 inline align-[-3px]" />
        {asTable ? 'drawing' : 'table'}
      </TextButton>
    </p>
  );
}

interface ReadingProps extends Pick<TideStripProps, 'timeZone' | 'hourHref'> {
  tide: Tide;
  view: TimeView;
  marks: StripProps['marks'];
  linkRef: React.Ref<HTMLAnchorElement>;
}

function Reading({ tide, timeZone, hourHref, view, marks, linkRef }: ReadingProps) {
  const cursorMs = useTimeViewState(view, (state) => state.cursorMs);
  const pinned = useTimeViewState(view, (state) => state.pinned);
  const mark = cursorMs === null ? null : markAt(marks, cursorMs);
  const bar = mark === null ? undefined : tide.bars[mark.index];
  if (bar === undefined) return null;
  return (
    <TideReading
      bar={bar}
      barMinutes={tide.barMinutes}
      timeZone={timeZone}
      hourHref={hourHref}
      linkRef={linkRef}
      pinned={pinned}
    />
  );
}

const ANNOUNCE_MS = 500;

/** The cursor in words, at most twice a second. */
function Announcer({ tide, timeZone, view, marks }: Pick<StripProps, 'tide' | 'timeZone' | 'view' | 'marks'>) {
  const print = useFormat();
  const cursorMs = useThrottled(
    useTimeViewState(view, (state) => state.cursorMs),
    ANNOUNCE_MS,
  );
  const mark = cursorMs === null ? null : markAt(marks, cursorMs);
  const bar = mark === null ? undefined : tide?.bars[mark.index];
  return (
    <p aria-live="polite" className="sr-only">
      {bar === undefined ? '' : barSentence(bar, timeZone, print)}
    </p>
  );
}
