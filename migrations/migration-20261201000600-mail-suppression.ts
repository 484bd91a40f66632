import { Migration } from '@mikro-orm/migrations';

/** Doors by which mail to a person stops: a bounce or complaint told by the mail service, or the link in the mail itself. */
export class Migration20261201000600MailSuppression extends Migration {
  override up(): void {
    this.addSql(
      `create index alert_delivery_provider_id on alert_delivery (provider_id) where provider_id is not null`,
    );

    // The mail service knows addresses, not organizations. With `failure_words` the delivery itself is told to have failed too.
    this.addSql(`
      create function mail_suppress_address(address text, provider text, failure_words text) returns boolean
        language sql volatile security definer set search_path = public, pg_temp as $$
        update alert_delivery d set status = 'failed', failure = failure_words
        where failure_words is not null and d.provider_id = provider and d.email = lower(address);
        with stopped as (
          update app_user u set mail_suppressed_at = coalesce(u.mail_suppressed_at, now())
          where u.email = lower(address) returning 1)
        select exists (select from stopped) $$`);

    // Whoever holds the signed link of a mail may stop mail to the person it was sent to, and take that back.
    this.addSql(`
      create function mail_set_suppressed(delivery uuid, suppressed boolean) returns timestamptz
        language sql volatile security definer set search_path = public, pg_temp as $$
        update app_user u set mail_suppressed_at = case when suppressed then coalesce(u.mail_suppressed_at, now()) end
        from alert_delivery d where d.id = delivery and u.id = d.user_id
        returning u.mail_suppressed_at $$`);
    for (const signature of ['mail_suppress_address(text, text, text)', 'mail_set_suppressed(uuid, boolean)']) {
      this.addSql(`revoke all on function ${signature} from public`);
      this.addSql(`grant execute on function ${signature} to slackwater_app`);
    }
  }

  override down(): void {
    this.addSql(`drop function mail_set_suppressed(uuid, boolean)`);
    this.addSql(`drop function mail_suppress_address(text, text, text)`);
    this.addSql(`drop index alert_delivery_provider_id`);
  }
}
