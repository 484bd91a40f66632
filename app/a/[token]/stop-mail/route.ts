import { changeByLink, type LinkParams } from '../../link';
import { setStopped } from '../../stop-mail';

/** POST: stops mail to the person; also what a mail program's own unsubscribe button calls (RFC 8058). */
export const POST = changeByLink(setStopped(true), (path) => `${path}/stop`);

/** GET: changes nothing, for the mail programs that open the address instead; leads to the page that asks. */
export async function GET(_request: Request, { params }: LinkParams): Promise<Response> {
  const { token } = await params;
  return new Response(null, { status: 303, headers: { location: `/a/${encodeURIComponent(token)}/stop` } });
}
