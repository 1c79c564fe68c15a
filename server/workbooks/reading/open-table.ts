import { open } from 'node:fs/promises';
import { extname } from 'node:path';
import { openDelimited } from './delimited.ts';
import { DEFAULT_LIMITS, type OpenedTable, type ReadingLimits } from './table.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';
import { openXlsx } from './xlsx.ts';

const ZIP_MAGIC = Buffer.from([0x50, 0x4b, 0x03, 0x04]);
const EMPTY_ZIP_MAGIC = Buffer.from([0x50, 0x4b, 0x05, 0x06]);
const COMPOUND_MAGIC = Buffer.from([0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1]);

/**
 * Opens a spreadsheet for reading: `.xlsx`, `.xlsm` (macros are never run) or `.csv`, `.tsv`, `.txt`. Content decides beside the
 * name, and both must agree. Nothing is read into memory as a whole; call `close` when done.
 * Throws UnreadableFileError with a sentence that says what to do.
 */
export async function openTable(
  source: { path: string; fileName: string },
  options: { limits?: Partial<ReadingLimits> } = {},
): Promise<OpenedTable> {
  const limits = { ...DEFAULT_LIMITS, ...options.limits };
  const extension = readExtension(source.fileName);
  const { head, bytes, isEncrypted } = await readHead(source.path);
  if (bytes === 0) throw new UnreadableFileError('empty', 'The file is empty. Export it again and send the new file.');
  if (bytes > limits.fileBytes) {
    throw new UnreadableFileError(
      'too-large',
      `The file is larger than ${Math.round(limits.fileBytes / 1048576)} MB. Split it by year or by category and send the parts.`,
    );
  }
  if (startsWith(head, COMPOUND_MAGIC)) {
    throw isEncrypted
      ? new UnreadableFileError(
          'encrypted',
          'The workbook is protected with a password. Save a copy without the password and send that.',
        )
      : new UnreadableFileError(
          'old-format',
          'This is a workbook in the format used before 2007. Save it as .xlsx and send that.',
        );
  }
  const isZip = startsWith(head, ZIP_MAGIC) || startsWith(head, EMPTY_ZIP_MAGIC);
  if (extension === 'xlsx') {
    if (!isZip) {
      throw new UnreadableFileError(
        'wrong-content',
        `The name says ${extname(source.fileName)}, but the content isn't a workbook. Open it in your spreadsheet program and save it as .xlsx or .csv.`,
      );
    }
    return openXlsx(source.path, limits);
  }
  if (isZip) {
    throw new UnreadableFileError(
      'wrong-content',
      `The name says ${extname(source.fileName)}, but the content is a packed file. If it's a workbook, give it the ending .xlsx and send it again.`,
    );
  }
  return openDelimited(source.path, extension, limits);
}

function readExtension(fileName: string): 'xlsx' | 'csv' | 'tsv' {
  // eslint-disable-next-line no-control-regex -- control characters in a name are exactly what is refused here
  if (/[/\\\u0000-\u001f\u007f]/.test(fileName)) {
    throw new UnreadableFileError(
      'bad-name',
      'The file name holds characters that no file name may have. Rename it and send it again.',
    );
  }
  const extension = extname(fileName).toLowerCase();
  if (extension === '.xlsx' || extension === '.xlsm') return 'xlsx';
  if (extension === '.tsv' || extension === '.tab') return 'tsv';
  if (extension === '.csv' || extension === '.txt') return 'csv';
  if (extension === '.xls' || extension === '.xlsb' || extension === '.ods') {
    throw new UnreadableFileError(
      'unsupported-format',
      `Files of the kind ${extension} aren't read. Save it as .xlsx and send that.`,
    );
  }
  throw new UnreadableFileError(
    'unsupported-format',
    'Only .xlsx, .csv and .tsv files are read. Save the table as one of these.',
  );
}

async function readHead(path: string): Promise<{ head: Buffer; bytes: number; isEncrypted: boolean }> {
  const file = await open(path, 'r');
  try {
    const { size } = await file.stat();
    const head = Buffer.alloc(Math.min(512, size));
    await file.read(head, 0, head.length, 0);
    let isEncrypted = false;
    if (head.length === 512 && startsWith(head, COMPOUND_MAGIC)) {
      // A protected workbook is a compound file whose directory names an "EncryptedPackage" (MS-OFFCRYPTO §2.2, MS-CFB §2.2).
      const sectorBytes = 2 ** Math.min(head.readUInt16LE(30), 12);
      const directory = Buffer.alloc(8192);
      await file.read(directory, 0, directory.length, (head.readUInt32LE(48) + 1) * sectorBytes);
      isEncrypted = directory.includes(Buffer.from('EncryptedPackage', 'utf16le'));
    }
    return { head, bytes: size, isEncrypted };
  } finally {
    await file.close();
  }
}

function startsWith(head: Buffer, magic: Buffer): boolean {
  return head.subarray(0, magic.length).equals(magic);
}
