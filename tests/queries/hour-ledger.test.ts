import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { hourLedger, printedLedger } from '@/lib/queries/hour-ledger';
import { FORWARD_HOUR, REVERSE_HOUR, withRow } from './hour-facts';

describe('the ledger of an hour', () => {
  test('of reverse flow is load plus blend, with the hour table’s own load and production', () => {
    const { load, blend, dilution, production } = hourLedger(REVERSE_HOUR);
    expect([load, production, dilution]).toEqual([8.73, 13.63, 0]);
    expect(blend).toBeCloseTo(4.9, 10);
  });

  test('of forward flow is load less dilution', () => {
    const { load, blend, dilution, production } = hourLedger(FORWARD_HOUR);
    expect([load, production, blend]).toEqual([12.49, 8.33, 0]);
    expect(dilution).toBeCloseTo(4.16, 10);
  });

  test('of a mixed hour has both lines, and still closes', () => {
    const mixed = {
      ...FORWARD_HOUR,
      workedOut: {
        ...FORWARD_HOUR.workedOut,
        minutes: { forward: 35, reverse: 25, still: 0, unknown: 0 },
        blendedSupplyF: { mean: 45.5, lo: 45, hi: 46 },
      },
    };
    const { load, blend, dilution, production } = hourLedger(mixed);
    expect(blend).toBeCloseTo(1.5, 10);
    expect(dilution).toBeGreaterThan(0);
    expect(load + blend - dilution).toBeCloseTo(production, 10);
  });

  test('of an hour without a load delta-T is not there', () => {
    expect(Object.values(hourLedger(withRow(REVERSE_HOUR, { deltaTF: null })))).toEqual([NaN, NaN, NaN, NaN]);
  });

  test('as printed closes to the digit in both systems, whatever the numbers', () => {
    const degrees = fc.double({ min: 0, max: 30, noNaN: true });
    fc.assert(
      fc.property(
        degrees,
        degrees,
        degrees,
        fc.constantFrom('ip' as const, 'si' as const),
        (load, blend, dilution, units) => {
          const printed = printedLedger({ load, blend, dilution, production: load + blend - dilution }, units);
          for (const each of Object.values(printed) as number[]) expect(Math.round(each * 10) / 10).toBe(each);
          const left =
            Math.round(10 * printed.load) + Math.round(10 * printed.blend) - Math.round(10 * printed.dilution);
          expect(left).toBe(Math.round(10 * printed.production));
        },
      ),
    );
  });

  test('as printed shows load and production as they are rounded elsewhere on the page', () => {
    // 8.73 + 4.94 = 13.67 prints 8.7 and 13.7: the blend gives way.
    expect(printedLedger({ load: 8.73, blend: 4.94, dilution: 0, production: 13.67 }, 'ip')).toEqual({
      load: 8.7,
      blend: 5,
      dilution: 0,
      production: 13.7,
    });
  });
});
