import { formatHoursMinutes } from '@/lib/client/format';
import { localDayStarts, momentMs } from '@/lib/client/format-time';
import type { Tide } from '@/lib/schemas/results';
import { tideMarks } from './tide-marks';
import { TideShapes } from './tide-svg';

export interface TideStripSmallProps {
  tide: Tide | null;
  /** The period drawn; rows of one list share it, so that days line up. */
  from: string;
  to: string;
  timeZone: string;
  /** Half of it is full height: strips compare shape, not size. */
  designFlowGpm: number;
  /** At 1440 a day is 46 px: 322 for seven. */
  width?: number;
  height?: number;
}

/** A week of tide in a row of the plants' list. No fringe; hatch of 3 px; missing data break the line. */
export function TideStripSmall(props: TideStripSmallProps) {
  const { tide, from, to, timeZone, designFlowGpm, width = 322, height = 50 } = props;
  const fromMs = momentMs(from, timeZone);
  const toMs = momentMs(to, timeZone);
  const days = localDayStarts(fromMs, toMs, timeZone);
  const marks = tide === null ? [] : tideMarks(tide).filter((mark) => mark.endMs > fromMs && mark.startMs < toMs);
  const reach = Math.max(1, designFlowGpm / 2);
  const reverse = tide === null ? 0 : tide.bars.reduce((sum, bar) => sum + bar.reverseMinutes, 0);
  const label =
    marks.length === 0
      ? `bypass flow, last ${days.length} days: no data`
      : `bypass flow, last ${days.length} days; reverse for ${formatHoursMinutes(reverse)} hours`;
  const x = (ms: number) => Math.round(((ms - fromMs) / (toMs - fromMs)) * width) + 0.5;
  return (
    <svg
      role="img"
      aria-label={label}
      viewBox={`0 0 ${width + 1} ${height}`}
      preserveAspectRatio="none"
      width="100%"
      height={height}
      className="block"
    >
      {[...days.filter((ms) => ms >= fromMs), toMs].map((ms) => (
        <line key={ms} x1={x(ms)} x2={x(ms)} y1="0" y2={height} stroke="var(--grid)" />
      ))}
      <TideShapes
        marks={marks}
        extent={{ loGpm: -reach, hiGpm: reach }}
        fromMs={fromMs}
        toMs={toMs}
        x={0}
        y={0}
        width={width}
        height={height}
        small
        stillWidth={1}
      />
    </svg>
  );
}
