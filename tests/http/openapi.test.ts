import { readdir, readFile } from 'node:fs/promises';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { openApiDocument, OPERATIONS } from '@/lib/http/openapi/document';

const ROOT = 'app/api/v1';

/** `get /plants/{plantId}` of every method that a route file exports. */
async function routesOnDisk(): Promise<string[]> {
  const files = (await readdir(ROOT, { recursive: true })).filter((file) => path.basename(file) === 'route.ts');
  const found: string[] = [];
  for (const file of files) {
    const source = await readFile(path.join(ROOT, file), 'utf8');
    const place = `/${path.dirname(file).replaceAll('[', '{').replaceAll(']', '}')}`;
    for (const [, method = ''] of source.matchAll(
      /^export (?:const|async function|function) (GET|POST|PUT|PATCH|DELETE)\b/gm,
    ))
      found.push(`${method.toLowerCase()} ${place}`);
  }
  return found.sort();
}

interface Document {
  openapi: string;
  paths: Record<
    string,
    Record<string, { parameters?: { name: string; in: string }[]; responses: Record<string, unknown> }>
  >;
}
const document = openApiDocument('cookie') as Document;

describe('the OpenAPI document', () => {
  it('holds every route of app/api/v1 and nothing else', async () => {
    expect(OPERATIONS.map(({ method, path: at }) => `${method} ${at}`).sort()).toEqual(await routesOnDisk());
  });
  it('is of version 3.1 and describes each operation once', () => {
    expect(document.openapi).toBe('3.1.0');
    const described = Object.values(document.paths).flatMap((methods) => Object.keys(methods));
    expect(described).toHaveLength(OPERATIONS.length);
  });
  it.each(OPERATIONS.map((operation) => [`${operation.method} ${operation.path}`, operation] as const))(
    '%s names each parameter of its path',
    (_, operation) => {
      const wanted = [...operation.path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
      const parameters = document.paths[`/api/v1${operation.path}`]?.[operation.method]?.parameters ?? [];
      expect(parameters.filter((each) => each.in === 'path').map((each) => each.name)).toEqual(wanted);
    },
  );
});
