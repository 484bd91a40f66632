import { isDeepStrictEqual } from 'node:util';
import type { EntityManager } from '@mikro-orm/postgresql';
import { isoInstant, query, queryOne } from '../db/sql';

/** The mails that the local fake of the mail service was given. */
export interface DevMail {
  id: string;
  from: string;
  to: string[];
  subject: string;
  text: string;
  html: string;
  headers: Record<string, string>;
  createdAt: string;
}
export type NewDevMail = Omit<DevMail, 'id' | 'createdAt'>;

interface DevMailRow {
  id: string;
  sender: string;
  recipients: string[];
  subject: string;
  body_text: string;
  body_html: string;
  headers: Record<string, string>;
  created_at: string;
}

const COLUMNS = 'id, sender, recipients, subject, body_text, body_html, headers, created_at';
/** Enough for any development; a page shows them all. */
const MOST_LISTED = 200;

const mailOf = (row: DevMailRow): DevMail => ({
  id: row.id,
  from: row.sender,
  to: row.recipients,
  subject: row.subject,
  text: row.body_text,
  html: row.body_html,
  headers: row.headers,
  createdAt: isoInstant(row.created_at),
});

/**
 * Keeps a mail and gives its id. Under a key that has kept one before: the same id for the same mail, null for another.
 * Two at once under one key keep one.
 */
export async function keepMail(em: EntityManager, mail: NewDevMail, key: string | null): Promise<string | null> {
  const kept = await queryOne<{ id: string }>(
    em,
    `insert into dev_mail (idempotency_key, sender, recipients, subject, body_text, body_html, headers)
     values ($1, $2, $3, $4, $5, $6, $7) on conflict (idempotency_key) do nothing returning id`,
    [key, mail.from, JSON.stringify(mail.to), mail.subject, mail.text, mail.html, JSON.stringify(mail.headers)],
  );
  if (kept) return kept.id;
  const before = await queryOne<DevMailRow>(em, `select ${COLUMNS} from dev_mail where idempotency_key = $1`, [key]);
  if (!before) throw new Error('The mail under this key went away while it was looked at.');
  const { id, createdAt: _, ...earlier } = mailOf(before);
  return isDeepStrictEqual(earlier, mail) ? id : null;
}

/** Newest first. */
export async function listMails(em: EntityManager): Promise<DevMail[]> {
  const rows = await query<DevMailRow>(em, `select ${COLUMNS} from dev_mail order by created_at desc, id limit $1`, [
    MOST_LISTED,
  ]);
  return rows.map(mailOf);
}

export async function findMail(em: EntityManager, id: string): Promise<DevMail | null> {
  const row = await queryOne<DevMailRow>(em, `select ${COLUMNS} from dev_mail where id = $1`, [id]);
  return row && mailOf(row);
}

export async function deleteMails(em: EntityManager): Promise<void> {
  await query(em, `delete from dev_mail`);
}
