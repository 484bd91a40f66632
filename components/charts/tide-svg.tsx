import { INK } from '@/components/marks/pattern-defs';
import { dataRuns, runsOf, type Density, type Extent, type TideMark } from './tide-marks';

export interface TideShapesProps {
  marks: readonly TideMark[];
  extent: Extent;
  fromMs: number;
  toMs: number;
  /** The drawing's box in user units. */
  x: number;
  y: number;
  width: number;
  height: number;
  /** The hairs of the 90 % interval; left out on small strips. */
  fringe?: boolean;
  /** One finer hatch for every density. */
  small?: boolean;
  stillWidth?: number;
}

const round = (value: number) => Math.round(value * 100) / 100;

/** The strip's marks as SVG, for the drawings that are small or many: the same layers as on the canvas. */
export function TideShapes(props: TideShapesProps) {
  const { marks, extent, fromMs, toMs, fringe = false, small = false, stillWidth = 1.25 } = props;
  const at = (epochMs: number) => round(props.x + ((epochMs - fromMs) / (toMs - fromMs)) * props.width);
  const level = (flowGpm: number) => {
    const kept = Math.min(extent.hiGpm, Math.max(extent.loGpm, flowGpm));
    return round(props.y + ((extent.hiGpm - kept) / (extent.hiGpm - extent.loGpm)) * props.height);
  };
  const still = level(0);
  const bead = small ? 4 : 6;
  return (
    <g>
      <Unknowns {...{ marks, at, level, still, bead }} />
      {([3, 2, 1] as const).map((density) => (
        <Bars key={density} {...{ marks, at, level, still, density, small }} />
      ))}
      <Outline marks={marks} at={at} level={level} still={still} small={small} />
      {fringe ? <Fringes marks={marks} at={at} level={level} /> : null}
      {dataRuns(marks).map((run) => (
        <line
          key={run.startMs}
          x1={at(run.startMs)}
          x2={at(run.endMs)}
          y1={still}
          y2={still}
          stroke="var(--ink)"
          strokeWidth={stillWidth}
        />
      ))}
      {runsOf(marks, (mark) => mark.direction === 'still').map((run) => {
        const width = Math.max(bead, at(run.endMs) - at(run.startMs));
        return (
          <rect
            key={run.startMs}
            x={round((at(run.startMs) + at(run.endMs) - width) / 2 + 0.5)}
            y={still - bead / 2}
            width={round(width - 1)}
            height={bead}
            fill="var(--paper)"
            stroke="var(--ink)"
            strokeWidth="1"
          />
        );
      })}
    </g>
  );
}

interface Scales {
  marks: readonly TideMark[];
  at: (epochMs: number) => number;
  level: (flowGpm: number) => number;
  still: number;
}

function Bars({ marks, at, level, still, density, small }: Scales & { density: Density; small: boolean }) {
  const held = marks.filter((mark) => mark.density === density);
  const box = (mark: TideMark, flowGpm: number) =>
    `M${at(mark.startMs)} ${still}V${level(flowGpm)}H${at(mark.endMs)}V${still}z`;
  const forward = held.filter((mark) => mark.forwardGpm > 0).map((mark) => box(mark, mark.forwardGpm));
  const reverse = held.filter((mark) => mark.reverseGpm < 0).map((mark) => box(mark, mark.reverseGpm));
  return (
    <>
      {forward.length === 0 ? null : (
        <path d={forward.join('')} fill={INK.forward[density]} shapeRendering="crispEdges" />
      )}
      {reverse.length === 0 ? null : (
        <path d={reverse.join('')} fill={small ? INK.reverseSmall : INK.reverse[density]} />
      )}
    </>
  );
}

/** Steps along the ends of neighbouring bars, one path a side. */
function Outline({ marks, at, level, still, small }: Scales & { small: boolean }) {
  const path = (flow: (mark: TideMark) => number) =>
    runsOf(marks, (mark) => flow(mark) !== 0)
      .map((run) => {
        const steps = marks
          .slice(run.first - (marks[0]?.index ?? 0), run.last - (marks[0]?.index ?? 0) + 1)
          .map((mark) => `V${level(flow(mark))}H${at(mark.endMs)}`);
        return `M${at(run.startMs)} ${still}${steps.join('')}V${still}`;
      })
      .join('');
  const forward = path((mark) => mark.forwardGpm);
  const reverse = path((mark) => mark.reverseGpm);
  const width = small ? 0.7 : 0.9;
  return (
    <>
      {forward === '' ? null : <path d={forward} fill="none" stroke="var(--fwd)" strokeWidth={width} />}
      {reverse === '' ? null : <path d={reverse} fill="none" stroke="var(--rev)" strokeWidth={width} />}
    </>
  );
}

function Fringes({ marks, at, level }: Omit<Scales, 'still'>) {
  const outer: string[] = [];
  const inner: string[] = [];
  for (const { direction, loGpm, hiGpm, forwardGpm, reverseGpm, split, startMs, endMs } of marks) {
    if (loGpm === null || hiGpm === null || (direction !== 'forward' && direction !== 'reverse')) continue;
    const middle = round((at(startMs) + at(endMs)) / 2);
    const hair = (into: string[], from: number, to: number) => {
      if (to > from) into.push(`M${middle} ${level(from)}V${level(to)}`);
    };
    hair(outer, Math.max(loGpm, forwardGpm), hiGpm);
    hair(outer, loGpm, Math.min(hiGpm, reverseGpm));
    if (split) continue;
    hair(inner, Math.max(loGpm, 0), Math.min(hiGpm, forwardGpm));
    hair(inner, Math.max(loGpm, reverseGpm), Math.min(hiGpm, 0));
  }
  return (
    <>
      <path d={outer.join('')} fill="none" stroke="var(--ink2)" strokeWidth="0.8" />
      <path d={inner.join('')} fill="none" stroke="var(--paper)" strokeWidth="0.8" />
    </>
  );
}

function Unknowns({ marks, at, level, still, bead }: Scales & { bead: number }) {
  const top = (mark: TideMark) => Math.min(still - bead / 2, mark.hiGpm === null ? still : level(mark.hiGpm));
  const bottom = (mark: TideMark) => Math.max(still + bead / 2, mark.loGpm === null ? still : level(mark.loGpm));
  const offset = marks[0]?.index ?? 0;
  // One outline round neighbours, so that only the bounds are drawn and not the hours between.
  const d = runsOf(marks, (mark) => mark.direction === 'unknown')
    .map((run) => {
      const inside = marks.slice(run.first - offset, run.last - offset + 1);
      const above = inside.map((mark) => `L${at(mark.startMs)} ${top(mark)}H${at(mark.endMs)}`).join('');
      const below = inside
        .toReversed()
        .map((mark) => `V${bottom(mark)}H${at(mark.startMs)}`)
        .join('');
      return `M${at(run.startMs)} ${still}${above}${below}z`;
    })
    .join('');
  if (d === '') return null;
  return <path d={d} fill={INK.unknown} stroke="var(--ink3)" strokeWidth="0.8" strokeDasharray="2 1.5" />;
}
