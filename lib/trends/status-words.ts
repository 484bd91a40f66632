import { isLogEvent, plainWords } from './event-words';

/** What the status of a reading says of it: 'ends' when the log itself was off, cleared or set to another time. */
export type StatusMeaning = 'good' | 'bad' | 'ends' | 'unknown';

/** Without case and accents. Alarm and override say nothing against the sensor. Common practice, no source. */
const GOOD = new Set(
  `ok okay good normal valid true 0 192 online live reliable alarm unackedalarm unacked overridden override
  gut gultig ordnung bon valide correct bueno valido correcto`.split(/\s+/),
);
const BAD = new Set(
  `bad fault faulted faulty down stale offline invalid fail failed failure error err missing uncertain questionable
  unreliable suspect null nan disabled disconnected timeout overrange underrange 64
  schlecht ungultig fehler fehlerhaft storung gestort unsicher mauvais invalide defaut erreur douteux perime
  malo invalido fallo averia incierto dudoso`.split(/\s+/),
);
/** Phrases whose single words say something else. */
const BAD_PHRASE =
  /^(?:not? (?:good|ok|okay|valid|normal|reliable|available|data|value|comm|communication|reading|sensor|response)|out of (?:service|range)|over range|under range|comm(?:unication)?s? (?:fail|lost|loss|down|error)|open (?:loop|circuit)|short(?:ed)? (?:loop|circuit)|nicht |keine |kein |pas |hors |sin |fuera )/;
/** Four flags of a point: in alarm, fault, overridden, out of service (ANSI/ASHRAE 135, Status_Flags). */
const FLAGS =
  /^(t(?:rue)?|f(?:alse)?|[01])[ ,;]+(t(?:rue)?|f(?:alse)?|[01])[ ,;]+(t(?:rue)?|f(?:alse)?|[01])[ ,;]+(t(?:rue)?|f(?:alse)?|[01])$/;

/**
 * What a status text says of the reading beside it. One bad word is enough ("Good; stale" is bad); an empty status is good;
 * a text without a known word is unknown, which the caller may take for good.
 */
export function statusMeaning(text: string): StatusMeaning {
  if (isLogEvent(text)) return 'ends';
  const plain = plainWords(text);
  if (plain === '') return 'good';
  const flags = FLAGS.exec(plain);
  if (flags) return /^[t1]/.test(flags[2]!) || /^[t1]/.test(flags[4]!) ? 'bad' : 'good';
  if (BAD_PHRASE.test(plain)) return 'bad';
  const words = plain.split(/[^\p{L}\p{N}.]+/u).filter((word) => word !== '');
  if (words.some((word) => BAD.has(word))) return 'bad';
  return words.some((word) => GOOD.has(word)) ? 'good' : 'unknown';
}
