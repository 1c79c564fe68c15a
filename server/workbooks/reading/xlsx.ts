import { posix } from 'node:path';
import { isDateFormat } from './cell-dates.ts';
import { flattenBatches, type OpenedTable, type ReadingLimits, type SkippedSheet, type TableSheet } from './table.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';
import { openArchive, toSuspicious, type WorkbookArchive } from './workbook-archive.ts';
import { scanMergedRanges, type MergedRange } from './xlsx-merged-ranges.ts';
import { streamSheetRows, type SheetContext } from './xlsx-sheet.ts';
import { streamXml, unescapeText } from './xml-stream.ts';

/** Opens an Office Open XML workbook (transitional or strict). Hidden sheets and charts are skipped. */
export async function openXlsx(path: string, limits: ReadingLimits): Promise<OpenedTable> {
  const archive = await openArchive(path, limits);
  try {
    const workbookPart = await findWorkbookPart(archive, limits);
    const targets = await readRelations(archive, workbookPart, limits);
    const { declared, hasDatesFrom1904 } = await readWorkbook(archive, workbookPart, limits);
    if (declared.length > limits.sheets) throw toSuspicious(`It holds ${declared.length} sheets.`);
    const partOfType = (type: string) => [...targets.values()].find((target) => target.type === type)?.part;
    const dateStyles = await readDateStyles(archive, partOfType('styles'), limits);
    const sharedTexts = await readSharedTexts(archive, partOfType('sharedStrings'), limits);

    const sheets: TableSheet[] = [];
    const skippedSheets: SkippedSheet[] = [];
    for (const { name, relationId, isHidden } of declared) {
      const target = targets.get(relationId);
      if (isHidden) skippedSheets.push({ name, reason: 'hidden' });
      else if (!target || target.type !== 'worksheet' || !archive.has(target.part)) {
        skippedSheets.push({ name, reason: 'no cells' });
      } else sheets.push(buildSheet(archive, target.part, { name, dateStyles, sharedTexts, hasDatesFrom1904 }, limits));
    }
    if (sheets.length === 0) {
      throw new UnreadableFileError(
        'empty',
        'The workbook has no visible sheet with a table. Unhide the sheet and save it again.',
      );
    }
    return { format: 'xlsx', sheets, skippedSheets, hasDatesFrom1904, close: async () => archive.close() };
  } catch (error) {
    archive.close();
    throw error;
  }
}

function buildSheet(archive: WorkbookArchive, part: string, context: SheetContext, limits: ReadingLimits): TableSheet {
  let mergedRanges: MergedRange[] | null = null;
  const batches = async function* () {
    mergedRanges ??= await scanMergedRanges(archive.read(part));
    yield* streamSheetRows(archive.read(part), context, mergedRanges, limits);
  };
  return { name: context.name, batches, rows: () => flattenBatches(batches()) };
}

async function findWorkbookPart(archive: WorkbookArchive, limits: ReadingLimits): Promise<string> {
  if (archive.has('_rels/.rels')) {
    const targets = await readRelations(archive, '', limits);
    const main = [...targets.values()].find((target) => target.type === 'officeDocument');
    if (main && archive.has(main.part) && !/\.(bin|docx?|xml\.bin)$/i.test(main.part) && /workbook/i.test(main.part)) {
      return main.part;
    }
  }
  throw new UnreadableFileError(
    'wrong-content',
    'The content isn’t an .xlsx workbook. Open it in your spreadsheet program and save it as .xlsx or .csv.',
  );
}

async function readRelations(
  archive: WorkbookArchive,
  ofPart: string,
  limits: ReadingLimits,
): Promise<Map<string, { type: string; part: string }>> {
  const folder = posix.dirname(ofPart);
  const relationsPart = posix.join(folder, '_rels', `${posix.basename(ofPart)}.rels`);
  const relations = new Map<string, { type: string; part: string }>();
  if (!archive.has(relationsPart)) return relations;
  await readWhole(archive, relationsPart, limits, {
    open: (name, attributes) => {
      if (name !== 'Relationship' || attributes.TargetMode === 'External') return;
      const target = attributes.Target ?? '';
      relations.set(attributes.Id ?? '', {
        type: posix.basename(attributes.Type ?? ''),
        part: target.startsWith('/') ? target.slice(1) : posix.join(folder, target),
      });
    },
  });
  return relations;
}

async function readWorkbook(archive: WorkbookArchive, part: string, limits: ReadingLimits) {
  const declared: { name: string; relationId: string; isHidden: boolean }[] = [];
  let hasDatesFrom1904 = false;
  await readWhole(archive, part, limits, {
    open: (name, attributes) => {
      if (name === 'workbookPr') hasDatesFrom1904 = isTrue(attributes.date1904);
      if (name !== 'sheet') return;
      const relationKey = Object.keys(attributes).find((key) => key.endsWith(':id'));
      declared.push({
        name: attributes.name ?? '',
        relationId: relationKey ? (attributes[relationKey] ?? '') : '',
        isHidden: attributes.state === 'hidden' || attributes.state === 'veryHidden',
      });
    },
  });
  return { declared, hasDatesFrom1904 };
}

/** By cell style: whether its numbers are dates. */
async function readDateStyles(
  archive: WorkbookArchive,
  part: string | undefined,
  limits: ReadingLimits,
): Promise<boolean[]> {
  const codes = new Map<number, string>();
  const formatIds: number[] = [];
  let isInCellFormats = false;
  if (part === undefined || !archive.has(part)) return [];
  await readWhole(archive, part, limits, {
    open: (name, attributes) => {
      if (name === 'numFmt') codes.set(Number(attributes.numFmtId), attributes.formatCode ?? '');
      else if (name === 'cellXfs') isInCellFormats = true;
      else if (name === 'xf' && isInCellFormats) formatIds.push(Number(attributes.numFmtId ?? 0));
    },
    close: (name) => {
      if (name === 'cellXfs') isInCellFormats = false;
    },
  });
  return formatIds.map((id) => isDateFormat(id, codes.get(id)));
}

async function readSharedTexts(
  archive: WorkbookArchive,
  part: string | undefined,
  limits: ReadingLimits,
): Promise<string[]> {
  const texts: string[] = [];
  if (part === undefined || !archive.has(part)) return texts;
  let current = '';
  let characters = 0;
  let isInText = false;
  let isInPhonetic = false;
  await readWhole(archive, part, limits, {
    open: (name) => {
      if (name === 't') isInText = !isInPhonetic;
      else if (name === 'rPh') isInPhonetic = true;
      else if (name === 'si') current = '';
    },
    close: (name) => {
      if (name === 't') isInText = false;
      else if (name === 'rPh') isInPhonetic = false;
      else if (name === 'si') {
        texts.push(unescapeText(current));
        characters += current.length + 16;
        if (characters > limits.sharedTextCharacters) {
          throw new UnreadableFileError(
            'too-large',
            'The workbook holds more different texts than can be read. Save the table as .csv and send that.',
          );
        }
      }
    },
    text: (text) => {
      if (isInText) current += text;
    },
  });
  return texts;
}

async function readWhole(
  archive: WorkbookArchive,
  part: string,
  limits: ReadingLimits,
  listener: {
    open?: (name: string, attributes: Record<string, string>) => void;
    close?: (name: string) => void;
    text?: (text: string) => void;
  },
): Promise<void> {
  const deaf = () => undefined;
  const whole = { open: listener.open ?? deaf, close: listener.close ?? deaf, text: listener.text ?? deaf };
  for await (const _piece of streamXml(archive.read(part), whole, limits)) void _piece;
}

function isTrue(value: string | undefined): boolean {
  return value === '1' || value === 'true';
}
