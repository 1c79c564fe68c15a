/** Columns and rows of a merged range: columns 0-based, rows 1-based, ends included. */
export interface MergedRange {
  firstRow: number;
  lastRow: number;
  firstColumn: number;
  lastColumn: number;
}

const MOST_RANGES = 20_000;
const MARK = Buffer.from('mergeCell ');

/**
 * Merged ranges of a sheet in the order of their first row. They stand behind the cells in the file, so this passes over the
 * unpacked bytes once, looking for their mark alone; unpacking is a fifth of the time that parsing takes.
 */
export async function scanMergedRanges(chunks: AsyncIterable<Buffer>): Promise<MergedRange[]> {
  const ranges: MergedRange[] = [];
  let carried = Buffer.alloc(0);
  for await (const chunk of chunks) {
    const bytes = carried.length > 0 ? Buffer.concat([carried, chunk]) : chunk;
    let at = bytes.indexOf(MARK);
    let passed = Math.max(0, bytes.length - MARK.length);
    while (at >= 0) {
      const end = bytes.indexOf(0x3e, at);
      if (end < 0) {
        passed = bytes.length - at > 500 ? bytes.length : at;
        break;
      }
      const range = parseRange(
        /ref\s*=\s*["']([A-Z]+\d+:[A-Z]+\d+)["']/.exec(bytes.toString('latin1', at, Math.min(end, at + 500)))?.[1],
      );
      if (range && ranges.length < MOST_RANGES) ranges.push(range);
      passed = Math.max(passed, end);
      at = bytes.indexOf(MARK, end);
    }
    carried = Buffer.from(bytes.subarray(passed));
  }
  return ranges.sort((left, right) => left.firstRow - right.firstRow);
}

function parseRange(reference: string | undefined): MergedRange | null {
  const match = /^([A-Z]+)(\d+):([A-Z]+)(\d+)$/.exec(reference ?? '');
  if (!match) return null;
  return {
    firstColumn: readColumnLetters(match[1] ?? ''),
    firstRow: Number(match[2]),
    lastColumn: readColumnLetters(match[3] ?? ''),
    lastRow: Number(match[4]),
  };
}

/** 0-based column of its letters, from the beginning of a cell reference; -1 without letters. */
export function readColumnLetters(reference: string): number {
  let column = 0;
  for (let index = 0; index < reference.length; index += 1) {
    const letter = reference.charCodeAt(index) & ~32;
    if (letter < 65 || letter > 90) break;
    column = column * 26 + (letter - 64);
  }
  return column - 1;
}
