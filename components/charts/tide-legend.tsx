import { DirectionMark } from '@/components/marks/direction-mark';
import { DensitySwatches, FringeSwatch } from '@/components/marks/ink-swatches';
import type { ReactNode } from 'react';

const Key = ({ children }: { children: ReactNode }) => (
  <li className="flex items-center gap-2.5 whitespace-nowrap">{children}</li>
);

/** What the patterns mean. Series are named where they are drawn; only patterns need a key. */
export function TideLegend({ brief = false }: { brief?: boolean }) {
  return (
    <ul className="mt-2.5 flex flex-wrap gap-x-7 gap-y-1.5 text-small text-ink-2">
      <Key>
        <DirectionMark direction="forward" /> forward{brief ? ', surplus' : ''}
      </Key>
      <Key>
        <DirectionMark direction="reverse" /> reverse{brief ? ', deficit' : ''}
      </Key>
      <Key>
        <DirectionMark direction="still" /> still
      </Key>
      <Key>
        <DirectionMark direction="unknown" /> unknown{brief ? '' : ', drawn as its interval'}
      </Key>
      {brief ? null : (
        <>
          <Key>
            <DensitySwatches /> probability of that direction 95, 85, 70&nbsp;%
          </Key>
          <Key>
            <FringeSwatch /> fringe: central 90&nbsp;% interval
          </Key>
        </>
      )}
    </ul>
  );
}
