import { existsSync, readFileSync, statSync } from 'node:fs';
import path from 'node:path';

/** `import ... from`, `export ... from`, `import '...'` and `import('...')`, but not `import type` and `export type`: types are gone at run time. */
const IMPORTS =
  /(?:^|[;\n])\s*(?:import|export)\s+(?!type\b)(?:[^'"`;]*?\bfrom\s*)?(['"])([^'"\n]+)\1|\bimport\(\s*(['"])([^'"\n]+)\3\s*\)/g;
const COMMENTS = /\/\*[\s\S]*?\*\/|(?<=^|\s)\/\/[^\n]*/g;
const ENDINGS = ['', '.ts', '.tsx', '.mjs', '/index.ts', '/index.tsx'];

/**
 * The modules of ours that a text imports, as absolute paths; `@/` is the root. Packages and files that do not exist are left out.
 *
 * @param {string} text
 * @param {string} file its absolute path
 * @param {string} root
 * @returns {string[]}
 */
export function importsOf(text, file, root) {
  const found = [];
  for (const match of text.replace(COMMENTS, '').matchAll(IMPORTS)) {
    const wanted = match[2] ?? match[4] ?? '';
    const base = wanted.startsWith('@/')
      ? path.join(root, wanted.slice(2))
      : wanted.startsWith('.')
        ? path.resolve(path.dirname(file), wanted)
        : null;
    const target = base === null ? undefined : ENDINGS.map((ending) => base + ending).find(isFile);
    if (target !== undefined) found.push(target);
  }
  return found;
}

/**
 * The shortest way from a module back to itself, as absolute paths beginning and ending with it; null when there is none.
 *
 * @param {string} file
 * @param {(file: string) => string[]} importsOfFile
 * @returns {string[] | null}
 */
export function cycleThrough(file, importsOfFile) {
  const cameFrom = new Map([[file, '']]);
  for (const at of cameFrom.keys()) {
    for (const next of importsOfFile(at)) {
      if (next === file) return [...wayTo(at, cameFrom), file];
      if (!cameFrom.has(next)) cameFrom.set(next, at);
    }
  }
  return null;
}

function wayTo(at, cameFrom) {
  const way = [];
  for (let each = at; each !== ''; each = cameFrom.get(each) ?? '') way.unshift(each);
  return way;
}

const isFile = (name) => existsSync(name) && statSync(name).isFile();

/** An ESLint rule: no module imports itself through others. The graph is read from disk once a run, and again when a file changes. */
export const noCycle = {
  meta: {
    type: 'problem',
    schema: [{ type: 'object', properties: { root: { type: 'string' } }, additionalProperties: false }],
  },
  create(context) {
    const root = context.options[0]?.root ?? context.cwd;
    return {
      Program(node) {
        const own = importsOf(context.sourceCode.text, context.filename, root);
        const cycle = cycleThrough(context.filename, (file) =>
          file === context.filename ? own : storedImports(file, root),
        );
        if (cycle === null) return;
        const names = cycle.map((file) => path.relative(root, file)).join(' -> ');
        context.report({ node, loc: { line: 1, column: 0 }, message: `Import cycle: ${names}.` });
      },
    };
  },
};

const store = new Map();

function storedImports(file, root) {
  const changedMs = statSync(file).mtimeMs;
  const known = store.get(file);
  if (known?.changedMs === changedMs) return known.imports;
  const imports = importsOf(readFileSync(file, 'utf8'), file, root);
  store.set(file, { changedMs, imports });
  return imports;
}
