'use client';
import { createContext, useContext, useMemo, useState, type ReactNode } from 'react';
import * as format from '@/lib/client/format';
import type { Maybe, PrintedQuantity, UnitSystem } from '@/lib/client/format';
import { keepUnits } from './preferences';

interface UnitsChoice {
  units: UnitSystem;
  setUnits: (units: UnitSystem) => void;
}

const UnitsContext = createContext<UnitsChoice>({ units: 'ip', setUnits: () => undefined });

/** Holds the reader's unit system. Data stays in deg F, gpm and tons; only the printing changes. */
export function UnitsProvider({ initial, children }: { initial: UnitSystem; children: ReactNode }) {
  const [units, choose] = useState(initial);
  const value = useMemo(
    () => ({
      units,
      setUnits: (next: UnitSystem) => {
        keepUnits(next);
        choose(next);
      },
    }),
    [units],
  );
  return <UnitsContext value={value}>{children}</UnitsContext>;
}

export const useUnits = (): UnitsChoice => useContext(UnitsContext);

/** The printing functions of lib/client/format, bound to the reader's units. */
export function useFormat() {
  const { units } = useUnits();
  return useMemo(() => bindFormat(units), [units]);
}
export type BoundFormat = ReturnType<typeof bindFormat>;

/** As `useFormat`, for code outside components. */
export function bindFormat(units: UnitSystem) {
  return {
    units,
    temperature: (tempF: Maybe) => format.formatTemperature(tempF, units),
    deltaT: (deltaF: Maybe) => format.formatDeltaT(deltaF, units),
    deltaTChange: (deltaF: Maybe) => format.formatDeltaTChange(deltaF, units),
    flow: (flowGpm: Maybe) => format.formatFlow(flowGpm, units),
    bypass: (flowGpm: Maybe) => format.formatBypass(flowGpm, units),
    load: (loadTons: Maybe) => format.formatLoad(loadTons, units),
    plusMinus: (half: Maybe, quantity: PrintedQuantity) => format.formatPlusMinus(half, quantity, units),
    interval: (lo: Maybe, hi: Maybe, quantity: PrintedQuantity) => format.formatInterval(lo, hi, quantity, units),
    bypassInterval: (lo: Maybe, hi: Maybe) => format.formatInterval(lo, hi, 'flow', units, 'always'),
    unit: (quantity: PrintedQuantity) => format.unitLabel(quantity, units),
    with: (figure: string, quantity: PrintedQuantity) => format.withUnit(figure, format.unitLabel(quantity, units)),
  };
}
