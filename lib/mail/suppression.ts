import { queryOne } from '../db/sql';
import { withoutTenant } from '../db/tenant';

/** What the mail service said of an address: no more mail to it, and whether the mail it speaks of never arrived. */
export interface Suppression {
  address: string;
  /** The mail service's id of the mail. */
  providerId: string;
  /** Why that mail did not arrive, in words; null when it did (a complaint). */
  failure: string | null;
}

/** Stops mail to an address; false when nobody here has it. The delivery that did not arrive is told so. */
export async function suppressAddress({ address, providerId, failure }: Suppression): Promise<boolean> {
  const row = await withoutTenant((em) =>
    queryOne<{ known: boolean }>(em, `select mail_suppress_address($1, $2, $3) as known`, [
      address,
      providerId,
      failure,
    ]),
  );
  return row?.known === true;
}

/** Stops or resumes mail to the person a delivery went to; the caller has checked the delivery's link. */
export async function setMailStopped(deliveryId: string, stopped: boolean): Promise<void> {
  await withoutTenant((em) => queryOne(em, `select mail_set_suppressed($1, $2)`, [deliveryId, stopped]));
}
