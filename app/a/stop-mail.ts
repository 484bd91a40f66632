import { readDelivery } from '@/lib/commands/acknowledge-delivery';
import { setMailStopped } from '@/lib/mail/suppression';

/** Stops or resumes mail to the person behind a link that is still good. */
export const setStopped = (stopped: boolean) => async (deliveryId: string) => {
  if (!(await readDelivery(deliveryId))) return null;
  await setMailStopped(deliveryId, stopped);
  return readDelivery(deliveryId);
};
