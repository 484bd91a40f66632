/** January to December in English, German, French and Spanish. Abbreviations are their beginnings; the first one counts. */
const MONTH_NAMES: readonly string[] = [
  'january januar jänner janvier enero',
  'february februar février fevrier febrero',
  'march märz maerz mrz mars marzo',
  'april avril abril',
  'may mai mayo',
  'june juni juin junio',
  'july juli juillet julio',
  'august août aout agosto',
  'september septembre septiembre',
  'october oktober octobre octubre',
  'november novembre noviembre',
  'december dezember décembre decembre diciembre',
];
const MONTHS = new Map<string, number>();
MONTH_NAMES.forEach((names, index) => {
  for (const name of names.split(' '))
    for (let length = 3; length <= name.length; length++) {
      const beginning = name.slice(0, length);
      if (!MONTHS.has(beginning)) MONTHS.set(beginning, index + 1);
    }
});
const LONGEST_MONTH = 10;

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

/** 1 to 12, or 0 when the word is no month nor the first three or more letters of one. */
export const monthOfWord = (word: string): number =>
  word.length > LONGEST_MONTH ? 0 : (MONTHS.get(word.toLowerCase()) ?? 0);

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
