import { describe, expect, it } from 'vitest';
import { mergePatch } from '@/lib/commands/merge-patch';

// Examples of RFC 7396, appendix A, those whose patch is an object.
describe('mergePatch', () => {
  it.each([
    [{ a: 'b' }, { a: 'c' }, { a: 'c' }],
    [{ a: 'b' }, { b: 'c' }, { a: 'b', b: 'c' }],
    [{ a: 'b' }, { a: null }, {}],
    [{ a: 'b', b: 'c' }, { a: null }, { b: 'c' }],
    [{ a: ['b'] }, { a: 'c' }, { a: 'c' }],
    [{ a: 'c' }, { a: ['b'] }, { a: ['b'] }],
    [{ a: { b: 'c' } }, { a: { b: 'd', c: null } }, { a: { b: 'd' } }],
    [{ a: [{ b: 'c' }] }, { a: [1] }, { a: [1] }],
    [{ e: null }, { a: 1 }, { e: null, a: 1 }],
    [{}, { a: { bb: { ccc: null } } }, { a: { bb: {} } }],
    ['text', { a: 1 }, { a: 1 }],
  ])('%j with %j is %j', (target, patch, expected) => {
    expect(mergePatch(target, patch as Record<string, unknown>)).toEqual(expected);
  });
  it('does not change what it is given', () => {
    const target = { a: { b: 1 } };
    mergePatch(target, { a: { b: 2 } });
    expect(target).toEqual({ a: { b: 1 } });
  });
  it('sets no prototype', () => {
    const merged = mergePatch({}, JSON.parse('{"__proto__":{"owned":true}}') as Record<string, unknown>);
    expect((merged as { owned?: boolean }).owned).toBeUndefined();
  });
});
