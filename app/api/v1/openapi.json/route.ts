import { lucia } from '@/lib/auth/lucia';
import { openApiDocument } from '@/lib/http/openapi/document';
import { json, route } from '@/lib/http/route';

/** GET: OpenAPI 3.1 of this API. */
export const GET = route({ public: true, transaction: false }, async () =>
  json(openApiDocument(lucia().sessionCookieName), 200, { 'cache-control': 'public, max-age=300' }),
);
