import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { pathToFileURL } from 'node:url';

/**
 * True when node_modules holds what package-lock.json asks for. npm writes its own record of what it installed last of all, so an
 * interrupted installation does not pass. Parts for other machines (optional) may be missing.
 *
 * @param {string} folder
 */
export function dependenciesAreInstalled(folder) {
  const [wanted, installed] = ['package-lock.json', 'node_modules/.package-lock.json'].map((name) => {
    const file = path.join(folder, name);
    return existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')).packages : null;
  });
  if (!wanted || !installed) return false;
  return Object.entries(wanted).every(([name, entry]) => {
    const found = installed[name];
    if (name === '') return true;
    if (found === undefined) return entry.optional === true;
    return (
      found.version === entry.version && found.integrity === entry.integrity && existsSync(path.join(folder, name))
    );
  });
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  process.exitCode = dependenciesAreInstalled(process.cwd()) ? 0 : 1;
}
