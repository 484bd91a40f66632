import { INK } from './pattern-defs';

/** The six ink densities beside their meaning: how probable the drawn direction is. */
export function DensitySwatches() {
  const paints = [
    ...([3, 2, 1] as const).map((density) => ({ fill: INK.forward[density], edge: 'var(--fwd)' })),
    ...([3, 2, 1] as const).map((density) => ({ fill: INK.reverse[density], edge: 'none' })),
  ];
  return (
    <svg width="136" height="12" viewBox="0 0 136 12" aria-hidden="true" className="inline-block shrink-0">
      {paints.map(({ fill, edge }, index) => (
        <rect
          key={fill}
          x={index * 23 + 0.5}
          y="0.5"
          width="20"
          height="11"
          fill={fill}
          stroke={edge}
          strokeWidth={edge === 'none' ? 0 : 0.8}
        />
      ))}
    </svg>
  );
}

/** Five frayed bars: what the fringe looks like. */
export function FringeSwatch() {
  const bars = [0, 1, 2, 3, 4];
  return (
    <svg width="22" height="14" viewBox="0 0 22 14" aria-hidden="true" className="inline-block shrink-0">
      <rect x="0" y="5" width="22" height="8" fill="var(--fwd)" />
      {bars.map((bar) => (
        <g key={bar} strokeWidth="0.8">
          <line x1={bar * 4.4 + 2.2} x2={bar * 4.4 + 2.2} y1="1" y2="5" stroke="var(--ink2)" />
          <line x1={bar * 4.4 + 2.2} x2={bar * 4.4 + 2.2} y1="5" y2="9" stroke="var(--paper)" />
        </g>
      ))}
      <line x1="0" x2="22" y1="13.4" y2="13.4" stroke="var(--ink)" strokeWidth="1.25" />
    </svg>
  );
}

/** A piece of one ink, for a key: the block forward, the hatch, the dots, or flat dilution. */
export function InkSwatch({ ink }: { ink: 'forward' | 'reverse' | 'unknown' | 'dilution' | 'grey' }) {
  const fill = {
    forward: INK.forward[3],
    reverse: INK.reverse[2],
    unknown: INK.unknown,
    dilution: INK.forward[1],
    grey: 'var(--ink3)',
  }[ink];
  return (
    <svg width="22" height="12" viewBox="0 0 22 12" aria-hidden="true" className="inline-block shrink-0">
      <rect width="22" height="12" fill={fill} />
    </svg>
  );
}

/** A piece of line: solid for the distribution side, broken for the production side. */
export function LineSwatch({ broken = false, strong = false }: { broken?: boolean; strong?: boolean }) {
  return (
    <svg width="24" height="12" viewBox="0 0 24 12" aria-hidden="true" className="inline-block shrink-0">
      <line
        x1="0"
        x2="24"
        y1="6"
        y2="6"
        stroke={broken ? 'var(--ink2)' : 'var(--ink)'}
        strokeWidth={strong ? 1.5 : 1}
        strokeDasharray={broken ? '3 2' : undefined}
      />
    </svg>
  );
}
