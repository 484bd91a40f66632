import { MIGRATIONS } from '@/migrations';
import { orm } from './orm';

/**
 * Refuses to serve when this process could see past the tenant rule or runs against another schema than it was built for.
 * Throws with a sentence that says what to do.
 */
export async function checkDatabase(): Promise<void> {
  const connection = (await orm()).em.getConnection();
  const rows: { active: boolean; role: string }[] = await connection.execute(
    `select row_security_active('plant') as active, current_user as role`,
  );
  if (rows[0]?.active !== true) {
    throw new Error(
      `The database role "${rows[0]?.role ?? '?'}" is not bound by row-level security. Connect as slackwater_app (web) or slackwater_worker (worker), which the migrate step creates.`,
    );
  }
  const missing = await pendingMigrations();
  if (missing.length > 0)
    throw new Error(
      `The database lacks ${missing.length} migration(s), first ${missing[0] ?? ''}. Run the migrate step first.`,
    );
}

/** Names of migrations this build knows and the database has not run. */
export async function pendingMigrations(): Promise<string[]> {
  const rows: { name: string }[] = await (
    await orm()
  ).em
    .getConnection()
    .execute(`select name from mikro_orm_migrations`);
  const done = new Set(rows.map((row) => row.name));
  return MIGRATIONS.map((migration) => migration.name).filter((name) => !done.has(name));
}
