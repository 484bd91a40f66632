import path from 'node:path';
import { ESLint } from 'eslint';
import tseslint from 'typescript-eslint';
import { beforeAll, describe, expect, test } from 'vitest';

const root = path.resolve(import.meta.dirname, '../..');
// The project's own configuration, less the rules that need types: these texts are in no file, so the compiler has none for them.
const eslint = new ESLint({
  cwd: root,
  overrideConfig: [
    {
      files: ['**/*.ts', '**/*.tsx'],
      ...tseslint.configs.disableTypeChecked,
      languageOptions: { parserOptions: { projectService: false, project: false, program: null } },
    },
  ],
});

async function rulesBroken(file: string, text: string): Promise<string[]> {
  const results = await eslint.lintText(text, { filePath: path.join(root, file) });
  return results.flatMap((result) => result.messages.map((message) => message.ruleId ?? message.message));
}

// The first text loads every plugin, which takes seconds on a busy machine; the others take milliseconds.
beforeAll(async () => {
  await rulesBroken('lib/x.ts', '');
}, 120_000);

describe('the import direction', () => {
  test.each([
    ['lib/hydronics/x.ts', `import { log } from '@/lib/log';\nlog.info('');`],
    ['lib/hydronics/x.ts', `import { log } from '../log';\nlog.info('');`],
    ['lib/trends/x.ts', `export { ENTITIES } from '@/entities';`],
    ['lib/schemas/x.ts', `export { withTenant } from '@/lib/db/tenant';`],
    ['lib/client/x.ts', `export { withTenant } from '../db/tenant';`],
    ['lib/queries/x.ts', `export { migrations } from '@/jobs/runner';`],
    ['components/ui/x.tsx', `export { withTenant } from '@/lib/db/tenant';`],
    ['components/ui/x.tsx', `export { ENTITIES } from '@/entities';`],
    ['entities/x.ts', `export { log } from '@/lib/log';`],
    ['migrations/x.ts', `export { ENTITIES } from '@/entities';`],
    ['fixtures/x.ts', `export { withTenant } from '@/lib/db/tenant';`],
    ['app/x.ts', `export { ENTITIES } from '@/entities';`],
    ['lib/x.ts', `import '@/tests/support/empty';`],
  ])('refuses in %s: %s', async (file, text) => {
    expect(await rulesBroken(file, text)).toContain('import/no-restricted-paths');
  });

  test.each([
    ['lib/hydronics/x.ts', `export { POINT_ROLES } from '@/lib/point-roles';`],
    ['lib/queries/x.ts', `export { ENTITIES } from '@/entities';`],
    ['components/ui/x.tsx', `export { POINT_ROLES } from '../../lib/point-roles';`],
    ['components/ui/x.tsx', `export { z } from 'zod';`],
    ['tests/x.test.ts', `export { ENTITIES } from '@/entities';`],
  ])('allows in %s: %s', async (file, text) => {
    expect(await rulesBroken(file, text)).toEqual([]);
  });
});

describe('a tenant setting stays in its transaction', () => {
  test.each([
    "await run(`select set_config('app.orgs', $1, false)`);",
    "await run('select set_config($1, $2, false)');",
    "await run(`select set_config('app.orgs', ${ids}, false)`);",
    "await run(`select SET_CONFIG(\n'app.orgs', $1,\n FALSE )`);",
    "await run('set app.orgs = 1');",
    "await run('SET SESSION app.orgs = 1');",
  ])('refuses %s', async (statement) => {
    expect(await rulesBroken('lib/db/x.ts', `export async function x() { ${statement} }`)).toContain(
      'no-restricted-syntax',
    );
  });

  test.each([
    "await run(`select set_config('app.orgs', $1, true)`);",
    "await run('set local app.orgs = 1');",
    "await run('update plant set name = $1, demo = coalesce($2, false)');",
  ])('allows %s', async (statement) => {
    expect(await rulesBroken('lib/db/x.ts', `export async function x() { ${statement} }`)).toEqual([]);
  });
});

describe('house rules', () => {
  test('console is for programs with a terminal, not for the parts of the product', async () => {
    expect(await rulesBroken('lib/queries/x.ts', `console.log('');`)).toContain('no-console');
    expect(await rulesBroken('jobs/x.job.ts', `console.log('');`)).toContain('no-console');
    expect(await rulesBroken('jobs/migrate.ts', `console.log('');`)).toEqual([]);
    expect(await rulesBroken('lib/build/x.ts', `console.log('');`)).toEqual([]);
  });

  test('a comment cannot switch a rule off', async () => {
    expect(await rulesBroken('lib/x.ts', `// eslint-disable-next-line no-console\nconsole.log('');`)).toContain(
      'no-console',
    );
  });

  test('exports are named, except where Next.js wants a default', async () => {
    expect(await rulesBroken('lib/x.ts', `export default 1;`)).toContain('import/no-default-export');
    expect(await rulesBroken('app/page.tsx', `export default function Page() { return null; }`)).toEqual([]);
  });

  test('a file of more than 400 lines is refused', async () => {
    const lines = (count: number) =>
      Array.from({ length: count }, (_, index) => `export const x${index} = 0;`).join('\n');
    expect(await rulesBroken('lib/x.ts', lines(401))).toEqual(['max-lines']);
    expect(await rulesBroken('lib/x.ts', lines(400))).toEqual([]);
  });
});
