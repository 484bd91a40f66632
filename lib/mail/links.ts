import { deliveryToken } from './delivery-token';

export interface DeliveryLinks {
  acknowledge: string;
  acknowledgeWithNote: string;
  /** A page that asks first. */
  stop: string;
  /** For the mail program's own button: a POST stops mail at once, a GET leads to the page. */
  stopNow: string;
}

/** The links of one delivery. `publicUrl` without a slash at its end. */
export function deliveryLinks(deliveryId: string, publicUrl: string, secret: string): DeliveryLinks {
  const acknowledge = `${publicUrl}/a/${deliveryToken(deliveryId, secret)}`;
  return {
    acknowledge,
    acknowledgeWithNote: `${acknowledge}/note`,
    stop: `${acknowledge}/stop`,
    stopNow: `${acknowledge}/stop-mail`,
  };
}

/** Stopping in one tap in the mail program itself (RFC 2369, RFC 8058). */
export const unsubscribeHeaders = (links: DeliveryLinks): Record<string, string> => ({
  'List-Unsubscribe': `<${links.stopNow}>`,
  'List-Unsubscribe-Post': 'List-Unsubscribe=One-Click',
});

/** The page of an hour. */
export const hourLink = (publicUrl: string, plantId: string, hourMs: number): string =>
  `${publicUrl}/plants/${plantId}/hours/${new Date(hourMs).toISOString().replace('.000Z', 'Z')}`;
