import type { UnitSystem } from '@/lib/client/format';
import { isoInstant, wallClock, wallClockMs } from '@/lib/client/format-time';
import { SENSOR_ROLES, type SensorRole } from '@/lib/hydronics/calibration-types';
import { CreateSpotCheck } from '@/lib/schemas/sensors';
import { celsiusDeltaFromFahrenheitDelta, fahrenheitFromCelsius, gpmFromLitresPerSecond } from '@/lib/units';

/** The form as typed: texts in the reader's own units. */
export interface SpotCheckForm {
  role: SensorRole;
  /** Wall clock of the plant. */
  at: string;
  reading: string;
  shown: string;
  sigma: string;
  instrument: string;
  note: string;
}

export const isFlow = (role: SensorRole): boolean => role.endsWith('Flow');

/** A form that holds nothing yet but the time now and the usual uncertainty. */
export const emptyForm = (role: SensorRole, nowMs: number, timeZone: string, units: UnitSystem): SpotCheckForm => ({
  role,
  at: wallClock(nowMs, timeZone),
  reading: '',
  shown: '',
  sigma: usualSigma(role, units),
  instrument: '',
  note: '',
});

/** A thermometer in a well, a clamp-on meter: what is usual, as printed. */
export const usualSigma = (role: SensorRole, units: UnitSystem): string =>
  isFlow(role) ? '2' : units === 'ip' ? '0.1' : '0.05';

const number = (text: string): number | undefined => {
  const plain = text
    .trim()
    .replace(/,/g, '')
    .replace(/\u2212/g, '-');
  return plain === '' ? undefined : Number(plain);
};

/** What the field of the form is called that a path of the request stands for. */
const FIELD_OF: Readonly<Record<string, keyof SpotCheckForm>> = {
  at: 'at',
  role: 'role',
  readingF: 'reading',
  readingGpm: 'reading',
  shownF: 'shown',
  shownGpm: 'shown',
  sigmaF: 'sigma',
  sigmaPercent: 'sigma',
  instrument: 'instrument',
  note: 'note',
};
export const fieldOf = (path: string): keyof SpotCheckForm => FIELD_OF[path] ?? 'reading';

type Errors = Partial<Record<keyof SpotCheckForm, string>>;

/** The request that a filled form stands for, in the units of the API; or what is wrong, field by field. */
export function spotCheckBody(
  form: SpotCheckForm,
  timeZone: string,
  units: UnitSystem,
): { body: CreateSpotCheck } | { errors: Errors } {
  const errors: Errors = {};
  const si = units === 'si';
  const flow = isFlow(form.role);
  const value = (name: 'reading' | 'shown' | 'sigma', convert: (typed: number) => number) => {
    const typed = number(form[name]);
    if (typed === undefined) return undefined;
    if (!Number.isFinite(typed)) errors[name] = 'Give a number.';
    return si ? convert(typed) : typed;
  };
  const atMs = wallClockMs(form.at, timeZone);
  if (Number.isNaN(atMs)) errors.at = 'Give the day and the time of the reading.';
  const measured = (name: 'reading' | 'shown') => value(name, flow ? gpmFromLitresPerSecond : fahrenheitFromCelsius);
  const sigma = value('sigma', (typed) => (flow ? typed : typed / celsiusDeltaFromFahrenheitDelta(1)));
  const given = {
    at: Number.isNaN(atMs) ? '' : isoInstant(atMs),
    role: form.role,
    ...(flow
      ? { readingGpm: measured('reading'), shownGpm: measured('shown'), sigmaPercent: sigma }
      : { readingF: measured('reading'), shownF: measured('shown'), sigmaF: sigma }),
    instrument: form.instrument,
    note: form.note,
  };
  const parsed = CreateSpotCheck.safeParse(given);
  if (parsed.success && Object.keys(errors).length === 0) return { body: parsed.data };
  for (const issue of parsed.error?.issues ?? []) {
    const field = fieldOf(String(issue.path[0] ?? 'reading'));
    errors[field] ??= issue.message;
  }
  return { errors };
}

/**
 * Sensors a check may be of: those the plant has; the main's flow where only the units have meters; the pumps' rated flow where
 * no meter tells production flow at all.
 */
export function checkableRoles(sent: readonly string[]): SensorRole[] {
  const has = (...roles: readonly string[]) => roles.some((role) => sent.includes(role));
  return SENSOR_ROLES.filter((role) => {
    if (role === 'primaryFlow') return has('primaryFlow', 'unitFlow');
    if (role === 'ratedFlow') return !has('primaryFlow', 'unitFlow') && has('primaryPumpStatus', 'unitStatus');
    return role === 'bypassFlow' ? has('bypassFlow', 'bypassFlowUnsigned') : has(role);
  });
}
