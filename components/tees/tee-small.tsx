import { teeDrawing, type TeeFlows } from './tee-geometry';
import { TeePipes } from './tee-pipes';

export interface TeeSmallProps {
  flows: TeeFlows;
  /** The scale all small tees of a row share (`teeScale` of all of them). */
  pxPerGpm: number;
  label: string;
  width?: number;
  height?: number;
}

/** A tee drawing without figures, for a remedy or a state: seen before it is read. */
export function TeeSmall({ flows, pxPerGpm, label, width = 190, height = 90 }: TeeSmallProps) {
  const box = { left: 0, right: width, top: 1, bottom: height - 1, pipe: Math.round(width * 0.47), pxPerGpm };
  return (
    <svg
      role="img"
      aria-label={label}
      viewBox={`0 0 ${width} ${height}`}
      width={width}
      height={height}
      className="block max-w-full"
    >
      <TeePipes drawing={teeDrawing(flows, box)} arrows={false} />
    </svg>
  );
}
