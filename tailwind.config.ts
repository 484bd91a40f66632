import type { Config } from 'tailwindcss';

const token = (name: string): string => `var(--${name})`;
const type = (name: string): [string, { lineHeight: string }] => [
  token(`t-${name}`),
  { lineHeight: token(`t-${name}-line`) },
];

/** Names for the values of components/ui/tokens.css; no value stands here. */
export default {
  content: [],
  theme: {
    // `narrow` is for the header alone: between a phone and the width where plant, tabs, units and person all fit.
    screens: { narrow: { max: '1080px' }, phone: { max: '760px' } },
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      inherit: 'inherit',
      paper: token('paper'),
      sheet: token('sheet'),
      tint: token('tint'),
      ink: { DEFAULT: token('ink'), 2: token('ink2'), 3: token('ink3') },
      rule: token('rule'),
      grid: token('grid'),
      fwd: { DEFAULT: token('fwd'), 2: token('fwd2'), 1: token('fwd1') },
      rev: token('rev'),
    },
    fontFamily: { sans: token('sans'), serif: token('serif') },
    fontSize: {
      micro: type('micro'),
      small: type('small'),
      base: type('body'),
      figure: type('figure'),
      figureL: type('figure-large'),
      lead: type('lead'),
      title: type('title'),
    },
    borderRadius: { DEFAULT: '2px', none: '0', full: '9999px' },
    boxShadow: { none: 'none' },
  },
} satisfies Config;
