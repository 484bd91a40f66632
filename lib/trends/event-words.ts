/** A text without case, accents, brackets, quotation marks and the marks programs join words with. */
export function plainWords(text: string): string {
  return text
    .normalize('NFD')
    .replace(/[\u0300-\u036f]/g, '')
    .toLowerCase()
    .replace(/[{}[\]()"'’_\s-]+/g, ' ')
    .trim();
}

const LOG = '(?:trend ?log|trend|log|logging|recording|record|aufzeichnung|trendaufzeichnung|enregistrement|registro)';
const STOPPED =
  '(?:disabled?|interrupted|off|stopped|purged|cleared|enabled?|started|restarted|status|aus|gestoppt|deaktiviert|unterbrochen|geloscht|gestartet|aktiviert|arrete|desactive|interrompu|efface|active|demarre|desactivado|interrumpido|detenido|borrado|activado|iniciado)';
const EVENT = new RegExp(
  `^(?:${LOG}(?: is| est| ist)? ${STOPPED}|buffer (?:purged|cleared|full)|time change|zeitumstellung|changement d ?heure|cambio de hora)(?:$|[ :;,=])`,
);

/** No record about the log is longer. */
const LONGEST_EVENT = 120;

/**
 * Whether a text is a record about the log itself instead of a reading: it was disabled, enabled, interrupted or purged, or
 * the clock was set. From there on the last value is not known to stand any more.
 *
 * Source  the log records of Trend Log objects in ANSI/ASHRAE 135 (log-status: log-disabled, buffer-purged,
 *         log-interrupted; time-change); the spellings and the other languages are common practice, no source.
 */
export const isLogEvent = (text: string): boolean =>
  text.length <= LONGEST_EVENT && EVENT.test(plainWords(text.replace(/([a-z])([A-Z])/g, '$1 $2')));
