import { describe, expect, test } from 'vitest';
import { detectEncoding, TextStream } from '@/lib/trends/encoding';
import { bytesOf, utf16Of } from './support';

const TEXT = 'Time,Temp °C\n2026-07-20 00:00,6.7\n';
const latin1 = Uint8Array.from(TEXT, (char) => char.charCodeAt(0));

describe('detectEncoding', () => {
  test.each([
    ['UTF-8 without a mark', bytesOf(TEXT), 'utf-8'],
    ['UTF-8 with a mark', bytesOf(`\ufeff${TEXT}`), 'utf-8'],
    ['UTF-16 little-endian with a mark', utf16Of(TEXT, true, true), 'utf-16le'],
    ['UTF-16 big-endian with a mark', utf16Of(TEXT, false, true), 'utf-16be'],
    ['UTF-16 little-endian without a mark', utf16Of(TEXT, true, false), 'utf-16le'],
    ['UTF-16 big-endian without a mark', utf16Of(TEXT, false, false), 'utf-16be'],
    ['Windows-1252', latin1, 'windows-1252'],
  ] as const)('knows %s', (_, bytes, encoding) => {
    expect(detectEncoding(bytes)).toBe(encoding);
  });

  test('takes a head that ends inside a UTF-8 character for UTF-8', () => {
    const bytes = bytesOf('Temp °');
    expect(detectEncoding(bytes.subarray(0, bytes.length - 1))).toBe('utf-8');
  });

  test('puts up with a few zero bytes, as loggers leave them after a power cut', () => {
    expect(detectEncoding(bytesOf(`${TEXT.repeat(20)}\0\0\0${TEXT}`))).toBe('utf-8');
  });

  test.each([
    ['an empty file', new Uint8Array(), 'empty', 'The file is empty.'],
    [
      'a workbook',
      Uint8Array.of(0x50, 0x4b, 3, 4, 20),
      'not-text',
      'This is a spreadsheet workbook or a zip archive, not text.',
    ],
    ['a PDF', bytesOf('%PDF-1.7'), 'not-text', 'This is a PDF document, not text.'],
    [
      'an old workbook',
      Uint8Array.of(0xd0, 0xcf, 0x11, 0xe0),
      'not-text',
      'This is an old spreadsheet workbook (xls), not text.',
    ],
    [
      'bytes without meaning',
      Uint8Array.from({ length: 400 }, (_, i) => (i * 7) % 256),
      'not-text',
      'The file holds binary data, not text.',
    ],
  ] as const)('refuses %s and says what it is and what to do', (_, bytes, code, sentence) => {
    expect(() => detectEncoding(bytes)).toThrow(expect.objectContaining({ name: 'TrendError', code }));
    expect(() => detectEncoding(bytes)).toThrow(sentence);
    expect(() => detectEncoding(bytes)).toThrow(/Export the trend/);
  });
});

describe('TextStream', () => {
  test.each(['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const)(
    'gives the same %s text for pieces of one byte',
    (encoding) => {
      const bytes =
        encoding === 'utf-8'
          ? bytesOf(TEXT)
          : encoding === 'windows-1252'
            ? latin1
            : utf16Of(TEXT, encoding === 'utf-16le', true);
      const stream = new TextStream(encoding);
      let text = '';
      for (const byte of bytes) text += stream.decode(Uint8Array.of(byte));
      expect(text + stream.end()).toBe(TEXT);
    },
  );
});
