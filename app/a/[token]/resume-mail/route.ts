import { changeByLink } from '../../link';
import { setStopped } from '../../stop-mail';

/** POST: takes a stop back. */
export const POST = changeByLink(setStopped(false), (path) => `${path}/stop`);
