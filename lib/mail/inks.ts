/**
 * The product's inks as a mail needs them: literal values, since mail clients know no custom properties. They repeat
 * components/ui/tokens.css (a test compares the two).
 */
export interface Inks {
  paper: string;
  ink: string;
  ink2: string;
  ink3: string;
  rule: string;
  fwd: string;
  rev: string;
}

export const LIGHT: Inks = {
  paper: '#f7f8f5',
  ink: '#13201e',
  ink2: '#43514e',
  ink3: '#5c6966',
  rule: '#c3cac6',
  fwd: '#1b5e7b',
  rev: '#ae3f10',
};

export const DARK: Inks = {
  paper: '#0f1716',
  ink: '#eaf0ec',
  ink2: '#b3bfba',
  ink3: '#93a19c',
  rule: '#3a4845',
  fwd: '#79bddb',
  rev: '#f28c5c',
};

/** Faces fall back to the reader's own: a mail loads nothing. */
export const SANS = "'Asap Variable', Asap, system-ui, -apple-system, 'Segoe UI', Roboto, sans-serif";
export const SERIF = "'Brygada 1918 Variable', 'Brygada 1918', Georgia, 'Times New Roman', serif";

/**
 * The dark theme. Light inks stand inline on every element, so that a client without style sheets reads them; these rules
 * turn each over, `!important` because an inline style would win otherwise.
 */
export const DARK_SHEET = `
:root { color-scheme: light dark; supported-color-schemes: light dark; }
@media (prefers-color-scheme: dark) {
  .paper, .paper > table > tbody > tr > td { background-color: ${DARK.paper} !important; }
  .ink { color: ${DARK.ink} !important; }
  .ink2 { color: ${DARK.ink2} !important; }
  .ink3 { color: ${DARK.ink3} !important; }
  .rule { border-color: ${DARK.rule} !important; }
  .line { border-color: ${DARK.ink} !important; }
  .fwd { background-color: ${DARK.fwd} !important; }
  .rev { background-color: ${DARK.rev} !important; color: ${DARK.paper} !important; }
  .filled { background-color: ${DARK.ink} !important; border-color: ${DARK.ink} !important; color: ${DARK.paper} !important; }
}`;
