import { acknowledgeDelivery, readDelivery, type LinkedDelivery } from '@/lib/commands/acknowledge-delivery';
import { formatClock, formatDay, localDay } from '@/lib/client/format-time';
import { readDeliveryToken } from '@/lib/mail/delivery-token';
import { linkSecret } from '@/lib/mail/link-secret';

export interface LinkParams {
  params: Promise<{ token: string }>;
}

/** The delivery a link opens; null for a link that was changed, is too old, or whose person has gone. Changes nothing. */
export async function openLink({ params }: LinkParams): Promise<{ token: string; delivery: LinkedDelivery } | null> {
  const { token } = await params;
  const id = readDeliveryToken(token, linkSecret());
  const delivery = id === null ? null : await readDelivery(id);
  return delivery && { token, delivery };
}

/** What the page shows of an acknowledgement, and what a POST answers to its script. */
export interface AcknowledgedState {
  /** `06:41`, with its day when that is not the day it is looked at; null while nobody has acknowledged. */
  acknowledgedAt: string | null;
  canUndo: boolean;
}

export function stateOf({ acknowledgedAt, canUndo, timeZone }: LinkedDelivery): AcknowledgedState {
  if (acknowledgedAt === null) return { acknowledgedAt: null, canUndo: false };
  const atMs = Date.parse(acknowledgedAt);
  const today = localDay(atMs, timeZone) === localDay(Date.now(), timeZone);
  const clock = formatClock(atMs, timeZone);
  return { acknowledgedAt: today ? clock : `${formatDay(atMs, timeZone)} ${clock}`, canUndo };
}

type Change = (deliveryId: string, request: Request) => Promise<LinkedDelivery | null>;

/**
 * A handler for the POSTs of a link's pages: the signed token is all the right it needs, and all it has. Answers the page's
 * script with the state, a plain form with the way back to `back`.
 */
export function changeByLink(change: Change, back: (path: string) => string) {
  return async (request: Request, { params }: LinkParams): Promise<Response> => {
    const { token } = await params;
    const id = readDeliveryToken(token, linkSecret());
    const delivery = id === null ? null : await change(id, request);
    const wantsJson = request.headers.get('accept')?.includes('application/json') === true;
    const headers = { 'cache-control': 'no-store' };
    if (!delivery) {
      const detail = 'This link is no longer good, or was not copied whole.';
      if (wantsJson) return Response.json({ title: 'Not found', status: 404, detail }, { status: 404, headers });
      return new Response(detail, { status: 404, headers });
    }
    if (wantsJson) return Response.json(stateOf(delivery), { headers });
    // Relative, so that it holds whatever name the browser knows this host by.
    return new Response(null, { status: 303, headers: { ...headers, location: back(`/a/${token}`) } });
  };
}

/** Acknowledges with whatever note the form carries. */
export const acknowledgeByForm: Change = async (deliveryId, request) => {
  const type = request.headers.get('content-type') ?? '';
  const form = /form/.test(type) ? await request.formData().catch(() => null) : null;
  const note = form?.get('note');
  return acknowledgeDelivery(deliveryId, typeof note === 'string' ? note : '');
};
