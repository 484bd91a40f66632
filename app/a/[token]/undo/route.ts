import { undoAcknowledgement } from '@/lib/commands/acknowledge-delivery';
import { changeByLink } from '../../link';

/** POST: takes the acknowledgement back. The page it leads to must not acknowledge again by itself. */
export const POST = changeByLink(undoAcknowledgement, (path) => `${path}?undone=1`);
