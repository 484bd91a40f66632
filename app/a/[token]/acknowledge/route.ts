import { acknowledgeByForm, changeByLink } from '../../link';

/** POST: acknowledges the mail, with the form's note where there is one. */
export const POST = changeByLink(acknowledgeByForm, (path) => path);
