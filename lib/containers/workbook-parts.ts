import { posix } from 'node:path';
import { TrendError } from '../trends/types';
import { numberKind, type NumberKind } from './number-format';
import type { UnpackBudget } from './unpack-budget';
import { MOST_TEXT_CHARACTERS, readXml } from './xml-events';
import type { ZipArchive, ZipMember } from './zip-archive';

export interface WorkbookSheet {
  name: string;
  hidden: boolean;
  member: ZipMember;
}

export interface WorkbookParts {
  sheets: WorkbookSheet[];
  since1904: boolean;
  /** What numbers are, by a cell's style index. */
  kinds: readonly NumberKind[];
  sharedStrings: readonly string[];
}

const WORKBOOK = 'xl/workbook.xml';
/** Estimated memory of the shared strings; a year of one-minute stamps kept as text is about half of it. */
const MOST_STRING_BYTES = 64 * 1024 * 1024;
const STRING_OVERHEAD_BYTES = 40;
const MOST_SHEETS = 500;
const MOST_STYLES = 65_536;

const find = (archive: ZipArchive, path: string): ZipMember | undefined =>
  archive.members.find((member) => member.path.replace(/^\/+/, '').toLowerCase() === path.toLowerCase());

export const isWorkbook = (archive: ZipArchive): boolean => find(archive, WORKBOOK) !== undefined;

/** What another kind of office file is called, or null when the archive is none. */
export function otherOfficeFile(archive: ZipArchive): string | null {
  if (find(archive, 'xl/workbook.bin')) return 'a binary workbook (xlsb)';
  if (find(archive, 'mimetype') && find(archive, 'content.xml')) return 'an OpenDocument file';
  if (find(archive, '[Content_Types].xml')) return 'an office document that is no workbook';
  return null;
}

/**
 * Everything of a workbook but the rows of its sheets. Memory: the shared strings, at most 64 MB.
 *
 * Throws  TrendError `unsupported`, in words, for damaged parts and more shared text than is kept.
 */
export async function readWorkbookParts(
  archive: ZipArchive,
  label: string,
  budget: UnpackBudget,
): Promise<WorkbookParts> {
  const open = (member: ZipMember) => archive.read(member, `${label}/${member.path}`, budget);
  const workbook = find(archive, WORKBOOK);
  if (!workbook) throw new Error('readWorkbookParts: no workbook');
  const book = await readBook(label, open(workbook));
  const rels = find(archive, 'xl/_rels/workbook.xml.rels');
  const targets = rels ? await readTargets(label, open(rels)) : new Map<string, Target>();
  const byType = (type: string): ZipMember | undefined => {
    const target = [...targets.values()].find((each) => each.type === type);
    return find(archive, target?.path ?? `xl/${type}.xml`);
  };
  const sheets = book.sheets.flatMap(({ name, hidden, rel }): WorkbookSheet[] => {
    const target = targets.get(rel);
    const member = target?.type === 'worksheet' ? find(archive, target.path) : undefined;
    return member ? [{ name, hidden, member }] : [];
  });
  const styles = byType('styles');
  const strings = byType('sharedStrings');
  return {
    sheets,
    since1904: book.since1904,
    kinds: styles ? await readKinds(label, open(styles)) : [],
    sharedStrings: strings ? await readSharedStrings(label, open(strings)) : [],
  };
}

interface BookSheet {
  name: string;
  hidden: boolean;
  rel: string;
}

async function readBook(label: string, input: AsyncIterable<Uint8Array>) {
  const sheets: BookSheet[] = [];
  let since1904 = false;
  await readXml(label, input, {
    open: (name, attributes) => {
      if (name === 'workbookPr') since1904 = /^(1|true|on)$/i.test(attributes.date1904 ?? '');
      if (name !== 'sheet') return;
      if (sheets.length >= MOST_SHEETS) throw tooMuch(label, `more than ${MOST_SHEETS} sheets`);
      const [, rel = ''] = Object.entries(attributes).find(([key]) => /(^|:)id$/.test(key)) ?? [];
      const hidden = /hidden/i.test(attributes.state ?? '');
      sheets.push({ name: attributes.name ?? `Sheet${sheets.length + 1}`, hidden, rel });
    },
  });
  return { sheets, since1904 };
}

interface Target {
  /** Last word of the relationship's type. */
  type: string;
  path: string;
}

async function readTargets(label: string, input: AsyncIterable<Uint8Array>): Promise<Map<string, Target>> {
  const targets = new Map<string, Target>();
  await readXml(label, input, {
    open: (name, { Id: id, Type: type = '', Target: target = '', TargetMode: mode }) => {
      if (name !== 'Relationship' || id === undefined || mode === 'External') return;
      if (targets.size > 4 * MOST_SHEETS) throw tooMuch(label, 'too many parts');
      const path = target.startsWith('/') ? target.slice(1) : posix.join('xl', target);
      targets.set(id, { type: type.split('/').at(-1) ?? '', path });
    },
  });
  return targets;
}

async function readKinds(label: string, input: AsyncIterable<Uint8Array>): Promise<NumberKind[]> {
  const codes = new Map<number, string>();
  const kinds: NumberKind[] = [];
  let inCells = false;
  await readXml(label, input, {
    open: (name, attributes) => {
      if (name === 'cellXfs') inCells = true;
      else if (name === 'numFmt') codes.set(Number(attributes.numFmtId), attributes.formatCode ?? '');
      else if (name === 'xf' && inCells) {
        const id = Number(attributes.numFmtId ?? 0);
        kinds.push(numberKind(id, codes.get(id)));
      }
      if (codes.size > MOST_STYLES || kinds.length > MOST_STYLES)
        throw tooMuch(label, `more than ${MOST_STYLES} formats`);
    },
    close: (name) => {
      if (name === 'cellXfs') inCells = false;
    },
  });
  return kinds;
}

async function readSharedStrings(label: string, input: AsyncIterable<Uint8Array>): Promise<string[]> {
  const strings: string[] = [];
  let bytes = 0;
  let text = '';
  let phonetic = 0;
  let inText = false;
  await readXml(label, input, {
    open: (name) => {
      if (name === 'si') text = '';
      else if (name === 'rPh') phonetic++;
      inText = name === 't' && phonetic === 0;
    },
    text: (part) => {
      if (inText) text += part;
      if (text.length > MOST_TEXT_CHARACTERS) throw tooMuch(label, 'more text in one cell than a workbook can hold');
    },
    close: (name) => {
      inText = false;
      if (name === 'rPh') phonetic--;
      if (name !== 'si') return;
      // A copy of its own: a cut keeps the whole piece alive that it was cut from.
      const copy = Buffer.from(unescaped(text), 'utf8');
      strings.push(copy.toString('utf8'));
      bytes += STRING_OVERHEAD_BYTES + copy.length;
      if (bytes > MOST_STRING_BYTES) throw tooMuch(label, 'more text in its cells than is read from a workbook');
    },
  });
  return strings;
}

/** `_x000D_` and the like, by which a workbook writes characters that XML cannot hold. */
export function unescaped(text: string): string {
  if (!text.includes('_x')) return text;
  return text.replace(/_x([0-9A-Fa-f]{4})_/g, (_, hex: string) => String.fromCharCode(parseInt(hex, 16)));
}

const tooMuch = (label: string, what: string): TrendError =>
  new TrendError('unsupported', `"${label}" has ${what}. Export the sheet with the trend as CSV and send that.`);
