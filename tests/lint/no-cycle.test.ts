import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { ESLint } from 'eslint';
import tseslint from 'typescript-eslint';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { cycleThrough, importsOf, noCycle } from '../../lib/build/import-graph.mjs';

let root = '';
beforeEach(() => {
  root = mkdtempSync(path.join(tmpdir(), 'import-graph-'));
  mkdirSync(path.join(root, 'lib'));
});
afterEach(() => rmSync(root, { recursive: true }));

const write = (name: string, text: string) => writeFileSync(path.join(root, name), text);

async function messagesFor(name: string): Promise<string[]> {
  const eslint = new ESLint({
    cwd: root,
    overrideConfigFile: true,
    overrideConfig: [
      {
        files: ['**/*.ts'],
        languageOptions: { parser: tseslint.parser },
        plugins: { own: { rules: { 'no-cycle': noCycle } } },
        rules: { 'own/no-cycle': 'error' },
      },
    ],
  });
  return (await eslint.lintFiles([name])).flatMap((result) => result.messages.map((message) => message.message));
}

test('a module that reaches itself through others is reported with the way round', async () => {
  write('lib/a.ts', `import { b } from './b';`);
  write('lib/b.ts', `export * from '@/lib/c';`);
  write('lib/c.ts', `export const later = () => import('./a');`);
  write('lib/d.ts', `import { a } from './a';`);
  expect(await messagesFor('lib/b.ts')).toEqual(['Import cycle: lib/b.ts -> lib/c.ts -> lib/a.ts -> lib/b.ts.']);
  expect(await messagesFor('lib/d.ts')).toEqual([]);
});

test('what is imported is read from every form of import, and not from types, comments or strings of other kinds', () => {
  for (const name of ['a', 'b', 'c', 'd', 'e', 'f']) write(`lib/${name}.ts`, '');
  const text = [
    `import type { A } from './a';`,
    `// import { b } from './b';`,
    `/* import './b'; */`,
    `import {\n  c,\n} from '@/lib/c';`,
    `export { d } from './d';`,
    `import './e';`,
    `const f = () => import('./f');`,
    `import 'zod';`,
  ].join('\n');
  const names = importsOf(text, path.join(root, 'lib/x.ts'), root).map((file) => path.basename(file, '.ts'));
  expect(names).toEqual(['c', 'd', 'e', 'f']);
});

test('the shortest way round is found, and none where there is none', () => {
  const graph: Record<string, string[]> = { a: ['b', 'c'], b: ['d'], c: ['a'], d: ['a'], e: ['a'] };
  expect(cycleThrough('a', (file) => graph[file] ?? [])).toEqual(['a', 'c', 'a']);
  expect(cycleThrough('e', (file) => graph[file] ?? [])).toBeNull();
});
