import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import { Readable } from 'node:stream';
import { selectRow, selectRows, type Tx, execute } from './database.ts';

const chunkBytes = 1_048_576;

export interface StoredFile {
  id: number;
  fileName: string;
  sizeBytes: number;
  sha256: string;
}

/** SHA-256 of a file on disk, in hex. */
export async function hashFile(path: string): Promise<string> {
  const hash = createHash('sha256');
  for await (const chunk of createReadStream(path)) hash.update(chunk as Buffer);
  return hash.digest('hex');
}

/** Copies a file from disk into the database in chunks of 1 MiB, inside the caller's transaction. */
export async function storeFile(tx: Tx, path: string, fileName: string): Promise<StoredFile> {
  const [{ size }, sha256] = await Promise.all([stat(path), hashFile(path)]);
  const row = await selectRow<{ id: number }>(
    tx,
    'insert into stored_file (file_name, size_bytes, sha256) values ($fileName, $size, $sha256) returning id',
    { fileName, size, sha256 },
  );
  if (!row) throw new Error('file was not stored');
  let position = 0;
  for await (const bytes of createReadStream(path, { highWaterMark: chunkBytes })) {
    await execute(tx, 'insert into stored_file_chunk (file_id, position, bytes) values ($id, $position, $bytes)', {
      id: row.id,
      position,
      bytes: bytes as Buffer,
    });
    position += 1;
  }
  return { id: row.id, fileName, sizeBytes: size, sha256 };
}

/** The bytes of a stored file, one chunk in memory at a time. The transaction must stay open until the stream ends. */
export function readStoredFile(tx: Tx, id: number): Readable {
  async function* chunks(): AsyncGenerator<Buffer> {
    for (let position = 0; ; position += 1) {
      const [row] = await selectRows<{ bytes: Buffer }>(
        tx,
        'select bytes from stored_file_chunk where file_id = $id and position = $position',
        { id, position },
      );
      if (!row) return;
      yield row.bytes;
    }
  }
  return Readable.from(chunks());
}
