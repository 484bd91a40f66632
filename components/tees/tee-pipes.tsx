import { INK } from '@/components/marks/pattern-defs';
import type { TeeArrow, TeeDrawing } from './tee-geometry';

export interface TeePipesProps {
  drawing: TeeDrawing;
  /** Left out on the small tees, where a chevron would be all there is to see. */
  arrows?: boolean;
  /** A minimum-flow bypass valve stands in the pipe. */
  valve?: { x: number; y: number };
}

/** The water and the walls of a tee drawing. */
export function TeePipes({ drawing, arrows = true, valve }: TeePipesProps) {
  return (
    <g>
      {drawing.solid.map((band, index) => (
        <rect key={index} {...band} fill="var(--fwd)" shapeRendering="crispEdges" />
      ))}
      {/* One path: the hatch is in user space anyway, and no seam shows between its parts. */}
      <path
        d={drawing.hatch.map(({ x, y, width, height }) => `M${x} ${y}h${width}v${height}h${-width}z`).join('')}
        fill={INK.reverse[3]}
      />
      {drawing.dots === null ? null : <rect {...drawing.dots} fill={INK.unknown} />}
      {drawing.seams === '' ? null : <path d={drawing.seams} fill="none" stroke="var(--paper)" strokeWidth="2" />}
      <path d={drawing.bandWalls} fill="none" stroke="var(--ink)" strokeWidth="1.25" strokeLinecap="square" />
      <path
        d={drawing.pipeWalls}
        fill="none"
        stroke={drawing.dots === null ? 'var(--ink)' : 'var(--ink3)'}
        strokeWidth="1.25"
        strokeLinecap={drawing.wallsBroken ? 'butt' : 'square'}
        strokeDasharray={drawing.wallsBroken ? '4 3' : undefined}
      />
      {drawing.bead === null ? null : (
        <rect {...drawing.bead} fill="var(--paper)" stroke="var(--ink)" strokeWidth="1.25" />
      )}
      {valve === undefined ? null : (
        <path
          d={`M${valve.x - 9} ${valve.y - 8}h18l-18 16h18z`}
          fill="var(--paper)"
          stroke="var(--ink)"
          strokeWidth="1.25"
          strokeLinejoin="miter"
        />
      )}
      {arrows ? drawing.arrows.map((arrow) => <Chevron key={`${arrow.x} ${arrow.y}`} {...arrow} />) : null}
    </g>
  );
}

/** A chevron of flow. On hatch it stands on a patch of paper, or the lines would eat it. */
function Chevron({ x, y, to, on }: TeeArrow) {
  const turn = { right: 0, down: 90, left: 180, up: -90 }[to];
  const d = 'M-3.5 -4.5L3.5 0L-3.5 4.5';
  return (
    <g transform={`translate(${x} ${y}) rotate(${turn})`} fill="none">
      {on === 'hatch' ? <circle r="8" fill="var(--paper)" /> : null}
      <path d={d} stroke={on === 'solid' ? 'var(--paper)' : 'var(--rev)'} strokeWidth="1.9" />
    </g>
  );
}
