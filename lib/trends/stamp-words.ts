/** Month names by their first three letters: English, and the German and French spellings that differ. */
const MONTHS: Readonly<Record<string, number>> = {
  jan: 1,
  feb: 2,
  fev: 2,
  fév: 2,
  mar: 3,
  mär: 3,
  mrz: 3,
  apr: 4,
  avr: 4,
  may: 5,
  mai: 5,
  jun: 6,
  jui: 6,
  jul: 7,
  aug: 8,
  aoû: 8,
  aou: 8,
  sep: 9,
  oct: 10,
  okt: 10,
  nov: 11,
  dec: 12,
  dez: 12,
  déc: 12,
};
/** Weekdays by their first letters, Sunday 0: English by three, German by two where no English one begins so. */
const WEEKDAYS: Readonly<Record<string, number>> = {
  sun: 0,
  mon: 1,
  tue: 2,
  wed: 3,
  thu: 4,
  fri: 5,
  sat: 6,
  so: 0,
  mo: 1,
  di: 2,
  mi: 3,
  do: 4,
  fr: 5,
  sa: 6,
};
const LONGEST_WEEKDAY = 10;

/** Zone abbreviations written behind a time, in minutes east of UTC. Ones that mean several zones are left out. */
const ABBREVIATIONS: Readonly<Record<string, number>> = {
  z: 0,
  utc: 0,
  gmt: 0,
  est: -300,
  edt: -240,
  cst: -360,
  cdt: -300,
  mst: -420,
  mdt: -360,
  pst: -480,
  pdt: -420,
  akst: -540,
  akdt: -480,
  hst: -600,
  cet: 60,
  cest: 120,
  aest: 600,
  aedt: 660,
};

/** 1 to 12, or 0 when the word is no month. July in French shares its first three letters with June. */
export function monthOfWord(word: string): number {
  const lower = word.toLowerCase();
  if (lower.startsWith('juil')) return 7;
  return MONTHS[lower.slice(0, 3)] ?? 0;
}

/** 0 = Sunday to 6, or -1 when the word is no weekday. */
export function weekdayOfWord(word: string): number {
  if (word.length > LONGEST_WEEKDAY) return -1;
  const lower = word.toLowerCase();
  const english = WEEKDAYS[lower.slice(0, 3)];
  if (english !== undefined) return english;
  const isGerman = lower.length === 2 || lower.endsWith('tag') || lower === 'mittwoch' || lower === 'sonnabend';
  return (isGerman ? WEEKDAYS[lower.slice(0, 2)] : undefined) ?? -1;
}

/** Minutes east of UTC, or NaN when the abbreviation is not known. */
export const offsetMinutesOfAbbreviation = (word: string): number => ABBREVIATIONS[word.toLowerCase()] ?? Number.NaN;
