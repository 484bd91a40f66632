/** A JSON answer of another status than 200. */
export const json = (body: object, status = 200, headers: Record<string, string> = {}): Response =>
  new Response(JSON.stringify(body), {
    status,
    headers: { 'content-type': 'application/json; charset=utf-8', 'cache-control': 'private, no-cache', ...headers },
  });
