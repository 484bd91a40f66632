'use client';
import { Table2 } from 'lucide-react';
import { useCallback, useMemo, useState, type KeyboardEvent } from 'react';
import type uPlot from 'uplot';
import { InkSwatch, LineSwatch } from '@/components/marks/ink-swatches';
import { useFormat, useUnits } from '@/components/shell/units-context';
import { TextButton } from '@/components/ui/button';
import { SectionHead } from '@/components/ui/section';
import { Stale } from '@/components/ui/states';
import { usePhone } from '@/components/ui/use-phone';
import { formatNumber, toPrinted, unitLabel } from '@/lib/client/format';
import { addLocalDays, formatDay, formatDayTime, localDay, startOfLocalDay } from '@/lib/client/format-time';
import type { Tide } from '@/lib/schemas/results';
import { ChartTable } from './chart-table';
import { CursorLine } from './cursor-line';
import { drawGrid } from './draw-tide';
import { drawTemperatures } from './draw-temperatures';
import { PlotCanvas, type Limits, type Painter } from './plot-canvas';
import { niceTicks, nudgeApart } from './scales';
import { fourOf, temperatureColumns, temperatureLimits, type TemperatureColumns } from './temperature-columns';
import { TimeHeads } from './time-heads';
import { columnLevel, gridLines, timeColumns } from './time-columns';
import { createTimeView, useTimeView, useTimeViewState, type TimeRange } from './time-view';

export interface TeeTemperaturesProps {
  tide: Tide | null;
  fromMs: number;
  toMs: number;
  timeZone: string;
  stale?: boolean;
  /** Names of the four lines; the trade's words by default, other ones for a building bridge. */
  names?: TemperatureNames;
}
export interface TemperatureNames {
  distributionSupply: string;
  productionSupply: string;
  distributionReturn: string;
  productionReturn: string;
}

const NAMES: TemperatureNames = {
  distributionSupply: 'secondary supply',
  productionSupply: 'primary supply',
  distributionReturn: 'secondary return',
  productionReturn: 'primary return',
};
const EMPTY: TemperatureColumns = {
  centresMs: [],
  distributionSupplyF: [],
  productionSupplyF: [],
  distributionReturnF: [],
  productionReturnF: [],
};
const HEIGHT_PX = 200;

/** Temperatures on both sides of both tees: the two losses of the ledger, seen in time. Shares the strip's columns. */
export function TeeTemperatures({ tide, fromMs, toMs, timeZone, stale = false, names = NAMES }: TeeTemperaturesProps) {
  const view = useTimeView({ fromMs, toMs });
  const [asTable, setAsTable] = useState(false);
  const phone = usePhone();
  const columns = useMemo(() => (tide === null ? EMPTY : temperatureColumns(tide)), [tide]);
  const wide = useTimeViewState(view, (state) => state.range);
  const cursorMs = useTimeViewState(view, (state) => (phone ? state.cursorMs : null));
  // A phone shows the day of the cursor only: the strip above it is one day a row.
  const day = phone && cursorMs !== null ? localDay(cursorMs, timeZone) : null;
  const range = useMemo(
    () =>
      day === null
        ? wide
        : { fromMs: startOfLocalDay(day, timeZone), toMs: startOfLocalDay(addLocalDays(day, 1), timeZone) },
    [day, wide, timeZone],
  );
  const toggle = () => setAsTable((before) => !before);
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key === 't' && !event.ctrlKey && !event.metaKey && !event.altKey) toggle();
  };
  return (
    <section aria-label="Temperatures at the tees" className="border-t border-ink pt-2.5" onKeyDown={onKeyDown}>
      <SectionHead
        title="Temperatures at the tees"
        sub={day === null ? undefined : formatDay(range.fromMs, timeZone)}
        aside={<Keys asTable={asTable} onTable={toggle} />}
      />
      {asTable && tide !== null ? (
        <TemperatureTable tide={tide} timeZone={timeZone} names={names} />
      ) : (
        <Stale stale={stale}>
          <Plot {...{ columns, range, timeZone, names, view }} />
        </Stale>
      )}
    </section>
  );
}

function Keys({ asTable, onTable }: { asTable: boolean; onTable: () => void }) {
  return (
    <ul className="flex flex-wrap items-center gap-x-6 gap-y-1 text-small">
      <li className="flex items-center gap-2">
        <InkSwatch ink="reverse" /> blend rise, supply warmed by return
      </li>
      <li className="flex items-center gap-2">
        <InkSwatch ink="dilution" /> dilution, return cooled by supply
      </li>
      <li className="flex items-center gap-2">
        <LineSwatch strong /> distribution side
      </li>
      <li className="flex items-center gap-2">
        <LineSwatch broken /> production side
      </li>
      <li>
        <TextButton onClick={onTable} aria-pressed={asTable}>
          <Table2 size={16} strokeWidth={1.5} aria-hidden="true" className="mr-1 inline align-[-3px]" />
          {asTable ? 'drawing' : 'table'}
        </TextButton>
      </li>
    </ul>
  );
}

interface PlotProps {
  columns: TemperatureColumns;
  range: TimeRange;
  timeZone: string;
  names: TemperatureNames;
  view: ReturnType<typeof createTimeView>;
}

function Plot({ columns, range, timeZone, names, view }: PlotProps) {
  const { units } = useUnits();
  const print = useFormat();
  const [widthPx, setWidthPx] = useState(1156);
  const limits = useMemo(() => temperatureLimits(columns), [columns]);
  const [lo, hi] = limits;
  const xLimits: Limits = useMemo(() => [range.fromMs, range.toMs], [range]);
  const level = columnLevel(range.fromMs, range.toMs, widthPx);
  const heads = useMemo(() => timeColumns(range.fromMs, range.toMs, timeZone, level), [range, timeZone, level]);
  const verticals = useMemo(() => gridLines(heads, level, timeZone), [heads, level, timeZone]);
  const ticks = useMemo(() => {
    const shown = niceTicks(toPrinted(lo, 'temperature', units), toPrinted(hi, 'temperature', units));
    return shown.map((label) => ({ label, tempF: units === 'ip' ? label : label * 1.8 + 32 }));
  }, [lo, hi, units]);
  const data = useMemo<uPlot.AlignedData>(() => [columns.centresMs, ...fourOf(columns)], [columns]);
  const draw = useCallback(
    (painter: Painter) => {
      drawGrid(
        painter,
        ticks.map((tick) => tick.tempF),
        verticals,
      );
      drawTemperatures(painter, columns);
    },
    [columns, ticks, verticals],
  );
  const atY = (tempF: number) => ((hi - tempF) / (hi - lo)) * HEIGHT_PX;
  return (
    <div
      tabIndex={0}
      role="img"
      aria-label={`Supply and return temperatures on both sides of the tees. ${temperatureSentence(columns, print)} t shows them as a table.`}
      className="grid grid-cols-[64px_minmax(0,1fr)_124px] phone:grid-cols-[40px_minmax(0,1fr)]"
    >
      {/* Wide, the columns are the strip's, named there; a phone shows one day, by its hours. */}
      <div className="col-start-2 h-3 phone:h-5">
        <div className="hidden phone:block">
          <TimeHeads columns={heads} view={view} />
        </div>
      </div>
      <div aria-hidden="true" className="relative col-start-1 row-start-2 text-micro text-ink-2">
        <span className="absolute -top-4 left-0">{unitLabel('temperature', units)}</span>
        {ticks.map(({ label, tempF }) => (
          <span key={label} className="absolute right-2 -translate-y-1/2" style={{ top: atY(tempF) }}>
            {formatNumber(label)}
          </span>
        ))}
      </div>
      <div className="relative col-start-2 row-start-2 min-w-0">
        <PlotCanvas
          data={data}
          xLimits={xLimits}
          yLimits={limits}
          heightPx={HEIGHT_PX}
          draw={draw}
          onMove={(at) => {
            const centre = at === null ? undefined : nearest(columns.centresMs, at.x);
            if (centre !== undefined) view.moveCursor(centre, 'pointer');
          }}
          onPick={(epochMs) => {
            const centre = nearest(columns.centresMs, epochMs);
            if (centre !== undefined) view.pin(centre);
          }}
          onSelect={([fromMs, toMs]) => view.zoom({ fromMs, toMs }, 8 * 60_000)}
          onBack={view.back}
          onWidth={setWidthPx}
        />
        <CursorLine view={view} range={range} />
      </div>
      <LineNames columns={columns} names={names} range={range} atY={atY} />
    </div>
  );
}

/** Names at the right ends of the lines, 15 px apart at least. */
function LineNames(props: Pick<PlotProps, 'columns' | 'names' | 'range'> & { atY: (tempF: number) => number }) {
  const { columns, names, range, atY } = props;
  const lines = [
    { name: names.distributionReturn, values: columns.distributionReturnF, strong: true },
    { name: names.productionReturn, values: columns.productionReturnF, strong: false },
    { name: names.distributionSupply, values: columns.distributionSupplyF, strong: true },
    { name: names.productionSupply, values: columns.productionSupplyF, strong: false },
  ]
    .map((line) => ({ ...line, last: lastIn(columns.centresMs, line.values, range) }))
    .filter((line) => line.last !== null);
  const places = nudgeApart(
    lines.map((line) => atY(line.last ?? 0)),
    15,
  );
  return (
    <div aria-hidden="true" className="relative col-start-3 row-start-2 ml-3 text-micro text-ink-2 phone:hidden">
      {lines.map((line, index) => (
        <span
          key={line.name}
          className={`absolute -translate-y-1/2 whitespace-nowrap ${line.strong ? 'font-semibold text-ink' : ''}`}
          style={{ top: places[index] }}
        >
          {line.name}
        </span>
      ))}
    </div>
  );
}

function lastIn(centresMs: readonly number[], values: readonly (number | null)[], range: TimeRange): number | null {
  for (let index = values.length - 1; index >= 0; index -= 1) {
    const value = values[index] ?? null;
    if (value !== null && (centresMs[index] ?? Number.POSITIVE_INFINITY) <= range.toMs) return value;
  }
  return null;
}

function nearest(centresMs: readonly number[], epochMs: number): number | undefined {
  let best: number | undefined;
  for (const centre of centresMs) {
    if (best === undefined || Math.abs(centre - epochMs) < Math.abs(best - epochMs)) best = centre;
  }
  return best;
}

function temperatureSentence(columns: TemperatureColumns, print: ReturnType<typeof useFormat>): string {
  const warmest = Math.max(...columns.distributionSupplyF.map((value) => value ?? Number.NEGATIVE_INFINITY));
  return Number.isFinite(warmest)
    ? `Supply to the buildings reached ${print.with(print.temperature(warmest), 'temperature')}.`
    : 'Nothing to draw yet.';
}

function TemperatureTable({ tide, timeZone, names }: { tide: Tide; timeZone: string; names: TemperatureNames }) {
  const print = useFormat();
  const unit = print.unit('temperature');
  return (
    <ChartTable
      caption="Temperatures at the tees, one row a bar"
      head={[
        { label: 'time' },
        ...[names.productionSupply, names.distributionSupply, names.distributionReturn, names.productionReturn].map(
          (name) => ({ label: `${name}, ${unit}`, numeric: true }),
        ),
      ]}
      rows={tide.bars.map((bar) => ({
        key: bar.t,
        cells: [
          formatDayTime(bar.t, timeZone),
          print.temperature(bar.primarySupplyF),
          print.temperature(bar.blendedSupplyF),
          print.temperature(bar.secondaryReturnF),
          print.temperature(bar.primaryReturnF),
        ],
      }))}
    />
  );
}
