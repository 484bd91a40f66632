import type { CSSProperties } from 'react';
import { LIGHT, SANS, SERIF } from './inks';

/** Inline styles of the mail's parts, in light inks; a class of the ink's name beside each turns it over in the dark. */
export const base: CSSProperties = { margin: 0, fontFamily: SANS, fontVariantNumeric: 'tabular-nums lining-nums' };
export const ink: CSSProperties = { color: LIGHT.ink };
export const ink2: CSSProperties = { color: LIGHT.ink2 };
export const serif: CSSProperties = { fontFamily: SERIF, fontWeight: 600, ...ink };
export const small: CSSProperties = { ...base, ...ink2, fontSize: 13, lineHeight: '19px' };
export const ruled: CSSProperties = { borderBottom: `1px solid ${LIGHT.rule}` };
