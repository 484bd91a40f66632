import { Migration20261201000100Tenancy } from './migration-20261201000100-tenancy';
import { Migration20261201000200Plants } from './migration-20261201000200-plants';
import { Migration20261201000300Samples } from './migration-20261201000300-samples';
import { Migration20261201000400Results } from './migration-20261201000400-results';
import { Migration20261201000500Alerts } from './migration-20261201000500-alerts';
import { Migration20261201000600MailSuppression } from './migration-20261201000600-mail-suppression';
import { Migration20261201000700Calibration } from './migration-20261201000700-calibration';
import { Migration20261201000800Unpacking } from './migration-20261201000800-unpacking';
import { Migration20261201000900Resumable } from './migration-20261201000900-resumable';

/** In order of application; listed by import so that a bundled program carries them. */
export const MIGRATIONS = [
  { name: '20261201000100-tenancy', class: Migration20261201000100Tenancy },
  { name: '20261201000200-plants', class: Migration20261201000200Plants },
  { name: '20261201000300-samples', class: Migration20261201000300Samples },
  { name: '20261201000400-results', class: Migration20261201000400Results },
  { name: '20261201000500-alerts', class: Migration20261201000500Alerts },
  { name: '20261201000600-mail-suppression', class: Migration20261201000600MailSuppression },
  { name: '20261201000700-calibration', class: Migration20261201000700Calibration },
  { name: '20261201000800-unpacking', class: Migration20261201000800Unpacking },
  { name: '20261201000900-resumable', class: Migration20261201000900Resumable },
];
