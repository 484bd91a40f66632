export interface SparklineProps {
  /** Evenly spaced; null breaks the line. */
  values: readonly (number | null)[];
  /** Third ink: a column that is left out. */
  dim?: boolean;
  width?: number;
  height?: number;
  label?: string;
}

/** The data itself, on its own scale, with a hair under it; low and high stand beside it as numbers. */
export function Sparkline({ values, dim = false, width = 176, height = 26, label }: SparklineProps) {
  const known = values.filter((value) => value !== null);
  const lo = Math.min(...known);
  const hi = Math.max(...known);
  const x = (index: number) => 2 + (index / Math.max(1, values.length - 1)) * (width - 4);
  // A constant stands in the middle; it has no scale of its own.
  const y = (value: number) => (hi === lo ? height / 2 : 3 + ((hi - value) / (hi - lo)) * (height - 7));
  const steps: string[] = [];
  values.forEach((value, index) => {
    if (value === null) return;
    const joined = index > 0 && values[index - 1] !== null && values[index - 1] !== undefined;
    steps.push(`${joined ? 'L' : 'M'}${x(index).toFixed(1)} ${y(value).toFixed(1)}${joined ? '' : 'h0.01'}`);
  });
  const named = label === undefined ? { 'aria-hidden': true } : { role: 'img', 'aria-label': label };
  return (
    <svg
      width={width}
      height={height}
      viewBox={`0 0 ${width} ${height}`}
      preserveAspectRatio="none"
      className="block max-w-full"
      {...named}
    >
      <line x1="0" x2={width} y1={height - 0.5} y2={height - 0.5} stroke="var(--grid)" />
      <path
        d={steps.join('')}
        fill="none"
        stroke={dim ? 'var(--ink3)' : 'var(--ink)'}
        strokeWidth="1"
        strokeLinejoin="round"
        vectorEffect="non-scaling-stroke"
      />
    </svg>
  );
}
