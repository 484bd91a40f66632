'use client';
import { useFormat } from '@/components/shell/units-context';

export interface TeeUnit {
  name: string;
  /** Cooling it gave; null where it is not known. */
  loadTons: number | null;
  running: boolean | null;
  /** Load over rated, 0 to 1, fills the gauge; null: not known. */
  share: number | null;
}

export interface TeeUnitsProps {
  units: readonly TeeUnit[];
  /** Drawn where there are no single units: "2 units running". */
  running: number | null;
  top: number;
  bottom: number;
}

const BOX = { width: 94, height: 52 };
const MOST_UNITS = 4;

/** The production side: a box a unit, solid with a filled gauge while it runs, broken while it is off. */
export function TeeUnits({ units, running, top, bottom }: TeeUnitsProps) {
  const print = useFormat();
  if (units.length === 0 || units.length > MOST_UNITS) {
    const count = units.length > 0 ? units.filter((unit) => unit.running === true).length : running;
    return (
      <g>
        <rect x="0.5" y={top} width={BOX.width} height={bottom - top} fill="none" stroke="var(--ink)" />
        <text
          x={BOX.width / 2}
          y={(top + bottom) / 2 - 4}
          fontSize="17"
          fontWeight="600"
          textAnchor="middle"
          fill="var(--ink)"
        >
          {count ?? '-'}
        </text>
        <text x={BOX.width / 2} y={(top + bottom) / 2 + 13} fontSize="12" textAnchor="middle" fill="var(--ink2)">
          {count === 1 ? 'unit running' : 'units running'}
        </text>
      </g>
    );
  }
  const step = units.length === 1 ? 0 : (bottom - top - BOX.height) / (units.length - 1);
  const gap = Math.min(step, BOX.height + 40);
  return (
    <g>
      {units.map((unit, index) => {
        const y = top + index * gap;
        const on = unit.running === true;
        return (
          <g key={unit.name}>
            <rect
              x="0.5"
              y={y}
              width={BOX.width}
              height={BOX.height}
              fill="none"
              stroke={on ? 'var(--ink)' : 'var(--ink2)'}
              strokeDasharray={on ? undefined : '4 3'}
            />
            <text x="11" y={y + 21} fontSize="13" fontWeight={on ? 600 : 400} fill={on ? 'var(--ink)' : 'var(--ink2)'}>
              {unit.name}
            </text>
            <text x="11" y={y + 39} fontSize="12" fontWeight={on ? 600 : 400} fill={on ? 'var(--ink)' : 'var(--ink2)'}>
              {on ? print.with(print.load(unit.loadTons), 'load') : unit.running === null ? 'not known' : 'off'}
            </text>
            <Gauge x={BOX.width - 15} y={y + 10} height={BOX.height - 20} share={on ? unit.share : 0} />
          </g>
        );
      })}
    </g>
  );
}

function Gauge({ x, y, height, share }: { x: number; y: number; height: number; share: number | null }) {
  const filled = Math.min(1, Math.max(0, share ?? 0)) * height;
  return (
    <g>
      <rect x={x} y={y} width="5" height={height} fill="none" stroke="var(--ink2)" strokeWidth="0.8" />
      <rect x={x} y={y + height - filled} width="5" height={filled} fill="var(--ink)" />
    </g>
  );
}

/** The distribution side: one box, the load. */
export function TeeBuildings({
  x,
  top,
  bottom,
  loadTons,
}: {
  x: number;
  top: number;
  bottom: number;
  loadTons: number | null;
}) {
  const print = useFormat();
  const middle = (top + bottom) / 2;
  return (
    <g>
      <rect x={x} y={top} width="84" height={bottom - top} fill="none" stroke="var(--ink)" />
      <text x={x + 42} y={middle - 17} fontSize="12" textAnchor="middle" fill="var(--ink2)">
        buildings
      </text>
      <text x={x + 42} y={middle + 3} fontSize="17" fontWeight="600" textAnchor="middle" fill="var(--ink)">
        {print.load(loadTons)}
      </text>
      <text x={x + 42} y={middle + 19} fontSize="11" textAnchor="middle" fill="var(--ink2)">
        {print.unit('load')}
      </text>
    </g>
  );
}
