import { rm } from 'node:fs/promises';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { build } from 'esbuild';

const ROOT = path.resolve(import.meta.dirname, '../..');
const PROGRAMS = ['jobs/worker.ts', 'jobs/migrate.ts', 'jobs/load-demo.ts'] as const;

/**
 * Bundles the programs that run beside the web server into `dist/<name>.js`. Packages stay outside, in node_modules: some of
 * them have native parts, and the ORM looks for its own.
 *
 * Throws  when a program is missing or does not compile; esbuild has then printed where.
 */
export async function buildPrograms(outdir = path.join(ROOT, 'dist')): Promise<string[]> {
  await rm(outdir, { recursive: true, force: true });
  const result = await build({
    absWorkingDir: ROOT,
    entryPoints: PROGRAMS.map((program) => path.join(ROOT, program)),
    outdir,
    bundle: true,
    // Handlers that a program loads late stay files of their own, loaded late.
    splitting: true,
    chunkNames: 'chunks/[name]-[hash]',
    platform: 'node',
    format: 'esm',
    target: 'node20',
    packages: 'external',
    sourcemap: true,
    metafile: true,
    // A mark for the web's bundler; outside of it the package only throws.
    alias: { 'server-only': path.join(ROOT, 'lib/build/empty.ts') },
    logLevel: 'warning',
  });
  return Object.entries(result.metafile.outputs)
    .filter(([, output]) => output.entryPoint !== undefined)
    .map(([file]) => file);
}

if (process.argv[1] !== undefined && import.meta.url === pathToFileURL(process.argv[1]).href) {
  for (const file of await buildPrograms()) console.log(file);
}
