import type { UnitSystem } from '@/lib/client/format';

/** Choices kept in this browser. Cookies, so that the first byte of a page already has the right theme and units. */
export type Theme = 'system' | 'light' | 'dark';
export const THEME_COOKIE = 'slackwater-theme';
export const UNITS_COOKIE = 'slackwater-units';
const YEAR_SECONDS = 31_536_000;

export const readTheme = (value: string | undefined): Theme =>
  value === 'light' || value === 'dark' ? value : 'system';
export const readUnits = (value: string | undefined): UnitSystem | null =>
  value === 'ip' || value === 'si' ? value : null;

const keep = (name: string, value: string): void => {
  document.cookie = `${name}=${value}; path=/; max-age=${YEAR_SECONDS}; samesite=lax`;
};

/** The theme in force, as the document has it. */
export const currentTheme = (): Theme => readTheme(document.documentElement.dataset.theme);

/** Applies a theme at once and keeps it. */
export function chooseTheme(theme: Theme): void {
  if (theme === 'system') delete document.documentElement.dataset.theme;
  else document.documentElement.dataset.theme = theme;
  keep(THEME_COOKIE, theme);
}

export const keepUnits = (units: UnitSystem): void => keep(UNITS_COOKIE, units);
