/**
 * The hatches and dots of the whole document, in user space, so that neighbouring shapes hatch through as one. Stands
 * once, in the root layout; drawings refer to the ids of `INK`. Not `display: none`: some browsers then drop patterns.
 */
export function PatternDefs() {
  return (
    <svg width="0" height="0" aria-hidden="true" focusable="false" className="absolute">
      <defs>
        <Hatch id="hatch-3" period={4} width={2.1} />
        <Hatch id="hatch-2" period={4} width={1.15} />
        <Hatch id="hatch-1" period={6} width={1} />
        <Hatch id="hatch-small" period={3} width={1.5} />
        <pattern id="dots" width="4" height="4" patternUnits="userSpaceOnUse">
          <rect width="1" height="1" fill="var(--ink3)" />
          <rect x="2" y="2" width="1" height="1" fill="var(--ink3)" />
        </pattern>
      </defs>
    </svg>
  );
}

function Hatch({ id, period, width }: { id: string; period: number; width: number }) {
  return (
    <pattern id={id} width={period} height={period} patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
      <line x1={period / 2} y1="0" x2={period / 2} y2={period} stroke="var(--rev)" strokeWidth={width} />
    </pattern>
  );
}

/** Paints for SVG shapes, by what the water is and how sure its direction is (3 surest, 1 least). */
export const INK = {
  forward: { 3: 'var(--fwd)', 2: 'var(--fwd2)', 1: 'var(--fwd1)' },
  reverse: { 3: 'url(#hatch-3)', 2: 'url(#hatch-2)', 1: 'url(#hatch-1)' },
  reverseSmall: 'url(#hatch-small)',
  unknown: 'url(#dots)',
} as const;
