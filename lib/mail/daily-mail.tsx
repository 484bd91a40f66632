import { render } from '@react-email/components';
import { DailyMailHtml } from './daily-mail-html';
import type { DailyMail, DailyMailModel } from './daily-mail-model';
import { dailyMailText } from './daily-mail-text';
import { preheaderOf, subjectOf } from './sentences';

/**
 * The morning mail of one plant and local day. The same model makes the same mail, to the character: a mail service that
 * honours idempotency keys compares payloads.
 */
export async function dailyMail(model: DailyMailModel): Promise<DailyMail> {
  return {
    subject: subjectOf(model),
    preheader: preheaderOf(model),
    text: dailyMailText(model),
    html: await render(<DailyMailHtml model={model} />),
  };
}
