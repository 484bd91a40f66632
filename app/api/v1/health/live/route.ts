import { route } from '@/lib/http/route';

/** GET: this process answers. */
export const GET = route({ public: true, transaction: false, quiet: true }, async () => ({ status: 'live' }));
