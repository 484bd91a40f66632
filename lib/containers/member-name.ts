import { getFileNameLowLevel, type Entry } from 'yauzl';

const LONGEST_NAME = 255;

/** The name a zip entry goes by: UTF-8 where it is marked so or plainly is, else code page 437. Not yet safe to show. */
export function entryName(entry: Entry): string {
  const raw = entry.fileNameRaw;
  const named = getFileNameLowLevel(entry.generalPurposeBitFlag, raw, entry.extraFields, false);
  if ((entry.generalPurposeBitFlag & 0x800) !== 0 || raw.every((byte) => byte < 0x80)) return named;
  // Several packers write UTF-8 without the mark; text in code page 437 is hardly ever valid UTF-8.
  const fromField = entry.extraFields.some(({ id }) => id === 0x7075);
  if (fromField) return named;
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(raw).replaceAll('\\', '/');
  } catch {
    return named;
  }
}

/**
 * A path inside a container as a plain label: no step up, no root, no drive, no control or direction characters; at most 255
 * characters together with the container's own name, of which the end, that tells members apart, is kept.
 */
export function safeMemberName(container: string, path: string): string {
  const parts = path
    .split(/[/\\]/)
    .map((part) => part.replace(/[\u0000-\u001f\u007f-\u009f\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff]/g, '').trim())
    .filter((part) => part !== '' && part !== '.' && part !== '..' && !/^[a-z]:$/i.test(part));
  const inner = parts.join('/') || 'unnamed';
  const room = Math.max(100, LONGEST_NAME - 1 - container.length);
  const short = inner.length > room ? wellFormedEnd(inner, room) : inner;
  return `${container.slice(0, LONGEST_NAME - 1 - short.length)}/${short}`;
}

/** The last `length` characters, without half of a pair at the cut. */
function wellFormedEnd(text: string, length: number): string {
  const end = text.slice(-length);
  return /^[\udc00-\udfff]/.test(end) ? end.slice(1) : end;
}

/** Gives a name that was given before a number, so that every member has its own. */
export class MemberNames {
  private readonly given = new Set<string>();

  unique(name: string): string {
    let free = name;
    for (let nth = 2; this.given.has(free); nth++) free = `${name.slice(0, LONGEST_NAME - 8)} (${nth})`;
    this.given.add(free);
    return free;
  }
}
