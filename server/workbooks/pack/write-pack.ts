import type { Writable } from 'node:stream';
import { layOutAssumptions, writeAssumptions } from './assumptions-sheet.ts';
import { layOutCover, writeCover } from './cover-sheet.ts';
import { layOutLineSheet, writeLineSheet } from './line-sheet.ts';
import { layOutOverrides, writeOverrides } from './overrides-sheet.ts';
import { addUp, addUpLine } from './pack-arithmetic.ts';
import { checkContent, checksumContent, type PackContent } from './pack-content.ts';
import { formatInstant } from './pack-dates.ts';
import { nameSheets } from './pack-names.ts';
import { PackSheet, startWorkbook } from './pack-sheet.ts';
import { layOutSummary, writeSummary } from './summary-sheet.ts';

export interface WrittenPack {
  /** SHA-256 of what the pack says, also on its cover. The file's own checksum is the caller's to take. */
  checksum: string;
  sheetNames: string[];
  /** What the sheets add up to. */
  totals: { units: number; netValue: number };
}

/**
 * Writes the finance pack as a workbook and ends the stream: Cover, Summary, a sheet per line, Overrides, Assumptions. Sheets are written
 * row by row and not kept. Texts stay texts whatever they begin with; only the totals are formulas, each with its result.
 * Throws RangeError if the content doesn't run along its weeks; rejects if the stream fails.
 */
export async function writePack(content: PackContent, stream: Writable): Promise<WrittenPack> {
  checkContent(content);
  const checksum = checksumContent(content);
  const figures = content.lines.map((line) => addUpLine(line, content.weekStarts.length));
  const fixed = ['Cover', 'Summary', 'Overrides', 'Assumptions'];
  const lineSheets = nameSheets(
    content.lines.map(({ name }) => name),
    fixed,
  );
  const footer = `Fairweek, ${content.category}, pack ${content.number}, built ${formatInstant(content.builtAt, content.timeZone)}`;
  const failed = new Promise<never>((_resolve, reject) => stream.once('error', reject));
  const write = async () => {
    const workbook = startWorkbook(stream, {
      title: `${content.category}, demand plan, pack ${content.number}`,
      author: content.builtBy,
      at: content.builtAt,
    });
    const made = { lineSheets, figures, checksum };
    writeCover(new PackSheet(workbook, 'Cover', layOutCover(footer)), content, made);
    writeSummary(new PackSheet(workbook, 'Summary', layOutSummary(footer)), content, made);
    content.lines.forEach((line, index) => {
      const sheet = new PackSheet(
        workbook,
        lineSheets[index] ?? '',
        layOutLineSheet(content.weekStarts.length, footer),
      );
      writeLineSheet(sheet, content, line, figures[index] ?? addUpLine(line, content.weekStarts.length));
    });
    writeOverrides(new PackSheet(workbook, 'Overrides', layOutOverrides(footer)), content);
    writeAssumptions(new PackSheet(workbook, 'Assumptions', layOutAssumptions(footer)), content);
    await workbook.commit();
  };
  await Promise.race([write(), failed]);
  return {
    checksum,
    sheetNames: ['Cover', 'Summary', ...lineSheets, 'Overrides', 'Assumptions'],
    totals: {
      units: figures.reduce((sum, { units }) => sum + addUp(units), 0),
      netValue: figures.reduce((sum, { netValue }) => sum + addUp(netValue), 0),
    },
  };
}
