import { Migrator } from '@mikro-orm/migrations';
import { defineConfig, type Options } from '@mikro-orm/postgresql';
import { ENTITIES } from '@/entities';
import { MIGRATIONS } from '@/migrations';

/** MikroORM's settings for one connection URL; the same for web, worker, migrations and the command line. */
export function ormConfig(clientUrl: string, poolMax = 10): Options {
  return defineConfig({
    clientUrl,
    entities: ENTITIES,
    extensions: [Migrator],
    forceUtcTimezone: true,
    pool: { min: 0, max: poolMax },
    migrations: {
      tableName: 'mikro_orm_migrations',
      migrationsList: MIGRATIONS,
      snapshot: false,
      allOrNothing: true,
      disableForeignKeys: false,
    },
    // pg-boss owns its schema, and its queues are partitions the differ would propose to drop.
    schemaGenerator: { ignoreSchema: ['pgboss'], disableForeignKeys: false },
    discovery: { disableDynamicFileAccess: true },
    dynamicImportProvider: (id: string) => import(/* @vite-ignore */ /* webpackIgnore: true */ id),
  });
}
