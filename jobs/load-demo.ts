import { days, demoScenario, DEMO_STEP_MINUTES } from '@/fixtures/demo';
import { hashPassword } from '@/lib/auth/passwords';
import { createPlant } from '@/lib/commands/create-plant';
import { demoOrganizationId, ensureDemoAccounts } from '@/lib/commands/demo-accounts';
import { analyseNow, storeRecord } from '@/lib/commands/demo-record';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { queryOne } from '@/lib/db/sql';
import { withTenant } from '@/lib/db/tenant';
import { readEnv } from '@/lib/env';
import { CreatePlant } from '@/lib/schemas/plant';

/** Loads the invented demo into a database that holds no organization yet, or goes on where an earlier load was cut off. */
async function loadDemo(): Promise<void> {
  const env = readEnv('demo');
  if (!env.DEMO) return;
  configureOrm(env.DATABASE_URL, 2);
  const demo = demoScenario({ now: new Date() });
  const state = await withTenant({ organizationIds: [] }, (em) =>
    queryOne<{ organizations: number; demo: number }>(
      em,
      `select (select count(*)::integer from organization) as organizations, (select count(*)::integer from organization where id = any ($1::uuid[])) as demo`,
      [demo.organizations.map((each) => demoOrganizationId(each.key))],
    ),
  );
  if (state && state.organizations > 0 && state.demo === 0) {
    console.log('The database holds organizations of its own: no demo is loaded into it.');
    return;
  }
  const passwordHash = await hashPassword(env.DEMO_PASSWORD);
  const organizations = await withTenant({ organizationIds: [] }, (em) => ensureDemoAccounts(em, demo, passwordHash));
  for (const [index, plant] of demo.plants.entries()) {
    const organizationId = organizations.get(plant.organization) ?? '';
    const label = `Demo plant ${index + 1} of ${demo.plants.length}, ${plant.create.name}`;
    const plantId = await ensurePlant(organizationId, CreatePlant.parse({ ...plant.create, organizationId }));
    const total = Math.round((plant.toMs - plant.fromMs) / 86_400_000);
    const outcome = await storeRecord(
      { organizationId, plantId, stepMinutes: DEMO_STEP_MINUTES },
      {
        filename: 'Demo record (invented)',
        points: plant.points,
        fromMs: plant.fromMs,
        toMs: plant.toMs - DEMO_STEP_MINUTES * 60_000,
        days: days(plant),
      },
      (done) => console.log(`${label}: ${Math.min(done, total)} of ${total} days made`),
    );
    if (outcome === 'stored')
      await analyseNow({ organizationId, plantId }, (left) => console.log(`${label}: ${left} days left to analyse`));
  }
  console.log('The demo is loaded. Its plants, people and numbers are invented.');
}

async function ensurePlant(organizationId: string, plant: CreatePlant): Promise<string> {
  return withTenant({ organizationIds: [organizationId] }, async (em) => {
    const found = await queryOne<{ id: string }>(em, `select id from plant where organization_id = $1 and name = $2`, [
      organizationId,
      plant.name,
    ]);
    if (found) return found.id;
    const access = { kind: 'session', userId: null, tokenId: null } as const;
    return createPlant(
      em,
      {
        ...access,
        scope: 'session',
        ingestPlantId: null,
        onlyPlantId: null,
        memberships: [],
        organizationIds: [organizationId],
      },
      organizationId,
      plant,
    );
  });
}

try {
  await loadDemo();
} finally {
  await closeOrm();
}
