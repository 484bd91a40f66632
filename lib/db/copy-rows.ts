import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { EntityManager } from '@mikro-orm/postgresql';
import { from as copyFrom } from 'pg-copy-streams';
import { realArrayBytes, writeRealArray } from './real-array';
import { transactionClient } from './sql';

/** A column of a binary COPY and how its values are written. */
export type CopyKind = 'uuid' | 'date' | 'int2' | 'int4' | 'text' | 'real[]';
export type CopyValue = string | number | Float32Array | Float64Array;

const SIGNATURE = Buffer.from('PGCOPY\n\xff\r\n\0\0\0\0\0\0\0\0\0', 'latin1');
const TRAILER = Buffer.from([0xff, 0xff]);
const PG_EPOCH_DAYS = 10_957; // 2000-01-01 counted from 1970-01-01

const dayNumber = (day: string): number => Date.parse(`${day}T00:00:00Z`) / 86_400_000 - PG_EPOCH_DAYS;

function encodeValue(kind: CopyKind, value: CopyValue): Buffer {
  switch (kind) {
    case 'uuid':
      return Buffer.from(String(value).replaceAll('-', ''), 'hex');
    case 'text':
      return Buffer.from(String(value), 'utf8');
    case 'real[]': {
      const values = value as Float32Array;
      const bytes = Buffer.allocUnsafe(realArrayBytes(values.length));
      writeRealArray(bytes, 0, values);
      return bytes;
    }
    case 'int2': {
      const bytes = Buffer.allocUnsafe(2);
      bytes.writeInt16BE(Number(value));
      return bytes;
    }
    default: {
      const bytes = Buffer.allocUnsafe(4);
      bytes.writeInt32BE(kind === 'date' ? dayNumber(String(value)) : Number(value));
      return bytes;
    }
  }
}

function* binaryRows(kinds: readonly CopyKind[], rows: Iterable<readonly CopyValue[]>): Generator<Buffer> {
  yield SIGNATURE;
  for (const row of rows) {
    const parts: Buffer[] = [];
    const count = Buffer.allocUnsafe(2);
    count.writeInt16BE(kinds.length);
    parts.push(count);
    kinds.forEach((kind, index) => {
      const value = row[index];
      if (value === undefined)
        throw new RangeError(`copyRows: row has ${row.length} values for ${kinds.length} columns`);
      const bytes = encodeValue(kind, value);
      const length = Buffer.allocUnsafe(4);
      length.writeInt32BE(bytes.length);
      parts.push(length, bytes);
    });
    yield Buffer.concat(parts);
  }
  yield TRAILER;
}

/**
 * Fills a temporary table shaped by `columns` in the transaction of `em`, from which the caller inserts: COPY straight into a
 * table under row-level security is refused to everyone but its owner. The table goes with the transaction.
 */
export async function copyIntoTemporary(
  em: EntityManager,
  table: string,
  columns: Readonly<Record<string, CopyKind>>,
  rows: Iterable<readonly CopyValue[]>,
): Promise<void> {
  const client = await transactionClient(em);
  const names = Object.keys(columns);
  const typed = names.map((name) => `${name} ${columns[name] === 'real[]' ? 'real[]' : columns[name]}`);
  await client.query(`create temp table if not exists ${table} (${typed.join(', ')}) on commit drop`);
  await client.query(`truncate ${table}`);
  const target = client.query(copyFrom(`copy ${table} (${names.join(', ')}) from stdin (format binary)`));
  await pipeline(Readable.from(binaryRows(Object.values(columns), rows)), target);
}
