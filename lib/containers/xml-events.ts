import { SaxesParser } from 'saxes';
import { TextStream, type Encoding } from '../trends/encoding';
import { TrendError } from '../trends/types';

/** Longest stretch of XML without an element's start, end or text: a cell holds 32,767 characters at the most. */
const MOST_SILENT_CHARACTERS = 1024 * 1024;
/** Elements open at once; a workbook needs fewer than twenty. */
const MOST_DEPTH = 100;
/** Longest text put together from pieces, such as a cell with several fonts. */
export const MOST_TEXT_CHARACTERS = 1024 * 1024;

export interface XmlHandlers {
  /** Names come without their prefix; attributes as written. */
  open?: (name: string, attributes: Readonly<Record<string, string>>) => void;
  text?: (text: string) => void;
  close?: (name: string) => void;
  /** After every piece of the input. */
  piece?: () => Promise<void>;
}

/**
 * Sends a workbook part through the XML parser piece by piece. Nothing is resolved from outside, and a document type, the way to
 * entities that multiply, is refused.
 *
 * Throws  TrendError `unsupported`, in words that name `label`, for a document type or for XML that is not well-formed; what the
 *         handlers and the input throw.
 */
export async function readXml(label: string, input: AsyncIterable<Uint8Array>, handlers: XmlHandlers): Promise<void> {
  const parser = new SaxesParser({ xmlns: false, position: false });
  let seen = 0;
  let lastEventAt = 0;
  let depth = 0;
  const text = (part: string) => {
    lastEventAt = seen;
    handlers.text?.(part);
  };
  parser.on('error', () => {
    throw damagedPart(label);
  });
  parser.on('doctype', () => {
    throw refusedDocumentType(label);
  });
  parser.on('opentag', ({ name, attributes }) => {
    if (++depth > MOST_DEPTH) throw damagedPart(label);
    lastEventAt = seen;
    handlers.open?.(localName(name), attributes);
  });
  parser.on('closetag', ({ name }) => {
    depth--;
    lastEventAt = seen;
    handlers.close?.(localName(name));
  });
  parser.on('text', text);
  parser.on('cdata', text);

  let decoder: TextStream | undefined;
  const write = (piece: string) => {
    seen += piece.length;
    parser.write(piece);
    if (seen - lastEventAt > MOST_SILENT_CHARACTERS) throw damagedPart(label);
  };
  for await (const bytes of input) {
    decoder ??= new TextStream(encodingOf(bytes));
    write(decoder.decode(bytes));
    await handlers.piece?.();
  }
  write(decoder?.end() ?? '');
  parser.close();
  await handlers.piece?.();
}

/** Workbook parts are UTF-8, or UTF-16 with a mark. */
function encodingOf(head: Uint8Array): Encoding {
  if (head[0] === 0xff && head[1] === 0xfe) return 'utf-16le';
  if (head[0] === 0xfe && head[1] === 0xff) return 'utf-16be';
  return 'utf-8';
}

const localName = (name: string): string => {
  // Cells and values, nearly all of a sheet.
  if (name.length === 1) return name;
  const colon = name.indexOf(':');
  return colon < 0 ? name : name.slice(colon + 1);
};

const damagedPart = (label: string): TrendError =>
  new TrendError(
    'unsupported',
    `"${label}" is damaged: a part of the workbook is no well-formed XML. Open it in the program it comes from, save it again and send that, or export it as CSV.`,
  );

const refusedDocumentType = (label: string): TrendError =>
  new TrendError(
    'unsupported',
    `"${label}" is not read: a part of the workbook declares a document type, which no workbook of a spreadsheet program does. Export it as CSV and send that.`,
  );
