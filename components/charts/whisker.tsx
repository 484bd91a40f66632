export interface WhiskerProps {
  lo: number;
  hi: number;
  /** The likely value; without it the interval alone is drawn. */
  mid?: number;
  /** The axis all whiskers of a column share. */
  domain: readonly [number, number];
  /** Zero, or a limit: drawn in ink. The whisker is filled and heavy where this lies outside its interval. */
  limit?: number;
  /** Thin and grey: what is so now, beside a narrower answer. */
  quiet?: boolean;
  /** Heavy whatever it holds: the answer that the quiet one is compared with. */
  bold?: boolean;
  /** As wide as its column, up to `width`. */
  fluid?: boolean;
  /** No interval at all: the axis alone. */
  empty?: boolean;
  /** Fine lines at these values, the same all down a column. */
  grid?: readonly number[];
  label?: string;
  width?: number;
  height?: number;
}

/** An interval in a table: dot, whisker, end ticks. */
export function Whisker(props: WhiskerProps) {
  const {
    lo,
    hi,
    mid,
    domain,
    limit = 0,
    quiet = false,
    bold = false,
    fluid = false,
    empty = false,
    grid = [],
    label,
    width = 140,
    height = 22,
  } = props;
  const x = (value: number) => {
    const share = (value - domain[0]) / (domain[1] - domain[0]);
    return 4 + Math.min(1, Math.max(0, share)) * (width - 8);
  };
  const outside = limit < lo || limit > hi;
  const stroke = quiet ? 'var(--ink3)' : 'var(--ink)';
  const strokeWidth = quiet ? 1 : outside || bold ? 2 : 1.2;
  const middle = height / 2;
  const named = label === undefined ? { 'aria-hidden': true } : { role: 'img', 'aria-label': label };
  return (
    <svg
      width={width}
      height={height}
      viewBox={`0 0 ${width} ${height}`}
      className={`block ${fluid ? 'h-auto max-w-full' : ''}`}
      {...named}
    >
      {grid.map((value) => (
        <line key={value} x1={x(value)} x2={x(value)} y1="0" y2={height} stroke="var(--grid)" strokeWidth="1" />
      ))}
      <line x1={x(limit)} x2={x(limit)} y1="0" y2={height} stroke="var(--ink)" strokeWidth="1" />
      {empty ? null : (
        <g stroke={stroke} strokeWidth={strokeWidth}>
          <line x1={x(lo)} x2={x(hi)} y1={middle} y2={middle} />
          <line x1={x(lo)} x2={x(lo)} y1={middle - 4} y2={middle + 4} />
          <line x1={x(hi)} x2={x(hi)} y1={middle - 4} y2={middle + 4} />
          {mid === undefined ? null : (
            <circle cx={x(mid)} cy={middle} r="3.6" fill={outside ? 'var(--ink)' : 'var(--paper)'} strokeWidth="1.2" />
          )}
        </g>
      )}
    </svg>
  );
}
