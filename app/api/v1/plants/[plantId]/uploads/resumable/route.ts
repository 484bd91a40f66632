import { serveResumable } from '@/lib/commands/serve-resumable';
import { route } from '@/lib/http/route';
import { PlantParams } from '@/lib/schemas/common';

const serve = route({ params: PlantParams, transaction: false }, ({ access, request, params }) =>
  serveResumable(access, request, params),
);

/** OPTIONS: which version and extensions of the tus protocol are spoken here, and how long a file may be. */
export const OPTIONS = serve;

/** POST: begins a file that may be sent with pauses; its place is in the Location header. */
export const POST = serve;
