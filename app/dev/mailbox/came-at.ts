import { formatClock, formatDayYear } from '@/lib/client/format-time';
import type { DevMail } from '@/lib/mail/dev-mail-store';

/** When a mail came, on this machine's own clock: a mailbox has no plant and so no plant's zone. */
const machineZone = Intl.DateTimeFormat().resolvedOptions().timeZone;

export function cameAt(mail: DevMail): string {
  const ms = Date.parse(mail.createdAt);
  return `${formatDayYear(ms, machineZone)}, ${formatClock(ms, machineZone)}`;
}
