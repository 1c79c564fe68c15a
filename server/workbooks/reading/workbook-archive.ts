import { crc32 } from 'node:zlib';
import yauzl from 'yauzl';
import type { ReadingLimits } from './table.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';

/** The parts of a packed workbook by name; a part is read as a stream and checked against its size and checksum. */
export interface WorkbookArchive {
  has(name: string): boolean;
  read(name: string): AsyncGenerator<Buffer>;
  close(): void;
}

/** Reads the directory of a packed workbook and refuses it by the directory alone where a cap is passed, before anything is unpacked. */
export async function openArchive(path: string, limits: ReadingLimits): Promise<WorkbookArchive> {
  const zip = await new Promise<yauzl.ZipFile>((resolve, reject) => {
    yauzl.open(path, { lazyEntries: true, autoClose: false, validateEntrySizes: true }, (error, opened) => {
      if (error) reject(toDamaged(error));
      else resolve(opened);
    });
  });
  try {
    const entries = await readDirectory(zip, limits);
    return {
      has: (name) => entries.has(name.toLowerCase()),
      read: (name) => readEntry(zip, entries.get(name.toLowerCase())),
      close: () => zip.close(),
    };
  } catch (error) {
    zip.close();
    throw error;
  }
}

function readDirectory(zip: yauzl.ZipFile, limits: ReadingLimits): Promise<Map<string, yauzl.Entry>> {
  return new Promise((resolve, reject) => {
    if (zip.entryCount > limits.entries) {
      reject(toSuspicious(`It holds ${zip.entryCount} parts.`));
      return;
    }
    const entries = new Map<string, yauzl.Entry>();
    let unpackedBytes = 0;
    let packedBytes = 0;
    zip.on('error', (error: Error) => reject(toDamaged(error)));
    zip.on('end', () => resolve(entries));
    zip.on('entry', (entry: yauzl.Entry) => {
      unpackedBytes += entry.uncompressedSize;
      packedBytes += entry.compressedSize;
      const isTooDense =
        entry.uncompressedSize > limits.ratioFromBytes && entry.uncompressedSize > limits.ratio * entry.compressedSize;
      if (isTooDense) reject(toSuspicious('A part of it unpacks to many times its size.'));
      else if (unpackedBytes > limits.unpackedBytes) reject(toSuspicious('It unpacks to more than can be read.'));
      else if (packedBytes > zip.fileSize) reject(toSuspicious('Its parts overlap.'));
      else if (entry.fileName.includes('\0')) reject(toSuspicious('A part of it has a forbidden name.'));
      else if (entries.has(entry.fileName.toLowerCase())) reject(toSuspicious('Two parts of it have one name.'));
      else {
        if (entry.isEncrypted()) {
          reject(
            new UnreadableFileError(
              'encrypted',
              'The workbook is protected with a password. Save a copy without the password and send that.',
            ),
          );
          return;
        }
        entries.set(entry.fileName.toLowerCase(), entry);
        zip.readEntry();
      }
    });
    zip.readEntry();
  });
}

async function* readEntry(zip: yauzl.ZipFile, entry: yauzl.Entry | undefined): AsyncGenerator<Buffer> {
  if (!entry) throw toDamaged(new Error('a part of the workbook is missing'));
  const stream = await new Promise<NodeJS.ReadableStream & { destroy(): void }>((resolve, reject) => {
    zip.openReadStream(entry, (error, opened) => {
      if (error) reject(toDamaged(error));
      else resolve(opened);
    });
  });
  let checksum = 0;
  try {
    for await (const chunk of stream as AsyncIterable<Buffer>) {
      checksum = crc32(chunk, checksum);
      yield chunk;
    }
  } catch (error) {
    throw error instanceof UnreadableFileError ? error : toDamaged(error);
  } finally {
    stream.destroy();
  }
  if (checksum !== entry.crc32) throw toDamaged(new Error(`checksum of ${entry.fileName} differs`));
}

export function toDamaged(cause: unknown): UnreadableFileError {
  return new UnreadableFileError(
    'damaged',
    'The workbook is damaged and can’t be read to its end. Open it in your spreadsheet program, save it again and send the new file.',
    { cause },
  );
}

export function toSuspicious(what: string): UnreadableFileError {
  return new UnreadableFileError(
    'suspicious-content',
    `The workbook isn't built like one that a spreadsheet program writes. ${what} Copy the table into a new workbook and send that.`,
  );
}
