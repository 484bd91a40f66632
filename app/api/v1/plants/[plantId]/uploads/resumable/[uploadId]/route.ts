import { serveResumable } from '@/lib/commands/serve-resumable';
import { route } from '@/lib/http/route';
import { PlantParams, UploadParams } from '@/lib/schemas/common';

const serve = route(
  { params: PlantParams.extend(UploadParams.shape), transaction: false },
  ({ access, request, params }) => serveResumable(access, request, params),
);

/** HEAD: how far the file has come. */
export const HEAD = serve;

/** PATCH: more of the file, from where it ends. The body streams. */
export const PATCH = serve;

/** DELETE: ends a file that is not complete; nothing of it is kept. */
export const DELETE = serve;
