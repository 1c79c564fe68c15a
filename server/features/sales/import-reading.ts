import type { ImportFinding as ContractFinding, ImportMapping, ImportDetail } from '../../../shared/contracts/sales.ts';
import type { Weekday } from '../../../shared/domain/weeks.ts';
import {
  readImportRows,
  type ImportFinding as RowFinding,
  type ImportRow,
} from '../../workbooks/reading/import-rows.ts';
import {
  inspectTable,
  proposeForm,
  type FormProposal,
  type OpenQuestion,
  type TableInspection,
} from '../../workbooks/reading/inspect-table.ts';
import { fingerprintHeader, listMissingMeanings, proposeMapping } from '../../workbooks/reading/mapping.ts';
import { openTable } from '../../workbooks/reading/open-table.ts';
import {
  flattenBatches,
  nameColumn,
  type CellValue,
  type OpenedTable,
  type TableRow,
} from '../../workbooks/reading/table.ts';
import { UnreadableFileError } from '../../workbooks/reading/unreadable-file-error.ts';
import { toReadingForm, toTableMapping } from './mapping-translation.ts';
import { RangeResolver, type RangeSnapshot, type ResolverChoices } from './range-resolver.ts';
import { type StagingFile } from './staging-file.ts';

/** A finding with the cells of its row, as text. */
export interface FindingWithCells extends ContractFinding {
  rowValues: string[] | null;
}

export interface FileProposal {
  mapping: ImportMapping;
  fingerprint: string;
  sheets: ImportDetail['sheets'];
  sample: string[][];
  /** What a person should look at, from the file's looks alone. */
  findings: FindingWithCells[];
  /** Why no row can be read with this mapping; null = they can. */
  obstacle: string | null;
}

export interface ReadingContext {
  /** Settled first day of the trading week; null before the first import. */
  fixedFirstWeekday: Weekday | null;
  /** The mapping of an accepted file with the same column names. */
  recall(fingerprint: string): Promise<ImportMapping | null>;
  /** Category and line that suggest themselves. */
  suggested: { categoryId: number | null; lineId: number | null };
}

const largestFileBytes = 200 * 1024 * 1024;
const sampleRows = 20;
/** Told one by one up to here; a file with more is wrong as a whole. */
const mostFindings = 50_000;

/** Opens a stored copy of an uploaded file. Throws UnreadableFileError. */
export function openUpload(path: string, fileName: string): Promise<OpenedTable> {
  return openTable({ path, fileName }, { limits: { fileBytes: largestFileBytes } });
}

/**
 * Looks into an opened file: the given mapping completed, or one proposed from its content and from files like it.
 * Throws UnreadableFileError where nothing can be read from it at all, daily and monthly figures included.
 */
export async function proposeReading(
  table: OpenedTable,
  given: ImportMapping | null,
  context: ReadingContext,
): Promise<FileProposal> {
  const proposal = given ? await followMapping(table, given, context) : await proposeFromContent(table, context);
  const { mapping, form } = proposal;
  const missing = listMissingMeanings(toTableMapping(mapping).columns);
  if (form.refusal && form.refusal.code !== 'no-weeks') {
    throw new UnreadableFileError('suspicious-content', form.refusal.sentence);
  }
  const obstacle =
    missing.length > 0
      ? `Say which column holds: ${missing.map((meaning) => meaning.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`)).join(', ')}.`
      : (form.refusal?.sentence ?? null);
  const findings = form.questions.map((question) => toNotice(`question-${question}`, questionTexts[question]));
  if (obstacle !== null) findings.unshift(toNotice('mapping-incomplete', obstacle));
  return {
    mapping,
    fingerprint: proposal.fingerprint,
    sheets: [
      ...table.sheets.map(({ name }) => ({ name, isHidden: false, rows: null })),
      ...table.skippedSheets.map(({ name, reason }) => ({ name, isHidden: reason === 'hidden', rows: null })),
    ],
    sample: proposal.rows
      .slice(0, sampleRows)
      .map((row) => mapping.columns.map(({ index }) => showCell(row.cells[index]))),
    findings,
    obstacle,
  };
}

interface Proposed {
  mapping: ImportMapping;
  form: FormProposal;
  fingerprint: string;
  rows: readonly TableRow[];
}

async function proposeFromContent(table: OpenedTable, context: ReadingContext): Promise<Proposed> {
  const inspection = await inspectTable(table, { fixedFirstWeekday: context.fixedFirstWeekday });
  const recalled = await context.recall(inspection.fingerprint);
  const mapping = toContractMapping(inspection, context, recalled);
  return { mapping, form: inspection, fingerprint: inspection.fingerprint, rows: inspection.sampleRows };
}

function toContractMapping(
  { kind, mapping, columns, names, form, questions }: TableInspection,
  { suggested }: ReadingContext,
  recalled: ImportMapping | null,
): ImportMapping {
  const [first, ...moreSheets] = mapping.sheets;
  const remembered = new Map(recalled?.columns.map((column) => [column.index, column]));
  return {
    kind: recalled?.kind ?? kind ?? 'sales',
    sheet: first?.name === '' ? null : (first?.name ?? null),
    headerRow: first?.headerRow ?? 1,
    columns: columns.map(({ column, meaning, mechanic, scale, confidence }) => {
      const known = remembered.get(column);
      const header = names[column] ?? '';
      return known
        ? { ...known, header, confidence: 1 }
        : {
            index: column,
            header,
            meaning,
            ...(mechanic === undefined ? {} : { mechanicName: mechanic }),
            ...(scale === undefined ? {} : { scale }),
            confidence,
          };
    }),
    decimalMark: recalled && questions.includes('decimal-sign') ? recalled.decimalMark : form.decimalSign,
    weekDateIs: recalled && questions.includes('week-date-is') ? recalled.weekDateIs : form.weekDateIs,
    firstWeekday:
      recalled && (questions.includes('week-date-is') || questions.includes('first-weekday'))
        ? recalled.firstWeekday
        : form.firstWeekday,
    dateOrder: recalled?.dateOrder && questions.includes('date-order') ? recalled.dateOrder : form.dateOrder,
    yearNumberIs:
      recalled?.yearNumberIs && questions.includes('week-or-month') ? recalled.yearNumberIs : form.yearNumberIs,
    ...(moreSheets.length > 0 ? { moreSheets } : {}),
    valueIncludesVat: recalled?.valueIncludesVat ?? false,
    // Files of different categories often look alike, so where new items belong isn't carried over.
    ...suggested,
    newLineName: null,
  };
}

/** A person's mapping. Where it points to another sheet or header row than its columns come from, the columns are proposed anew. */
async function followMapping(table: OpenedTable, given: ImportMapping, context: ReadingContext): Promise<Proposed> {
  const sheet = given.sheet === null ? table.sheets[0] : table.sheets.find(({ name }) => name === given.sheet);
  if (!sheet) {
    const detail = `The sheet “${given.sheet ?? ''}” can’t be read: it is hidden or empty. Choose another, or show it in your spreadsheet program and send the file again.`;
    throw new UnreadableFileError('no-header', detail);
  }
  const rows: TableRow[] = [];
  let headerCells: readonly CellValue[] = [];
  for await (const row of flattenBatches(sheet.batches())) {
    if (row.row === given.headerRow) headerCells = row.cells;
    if (row.row > given.headerRow) rows.push(row);
    if (rows.length >= 500) break;
  }
  if (rows.length === 0) {
    throw new UnreadableFileError('header-only', `There is nothing below row ${given.headerRow}. Choose another row.`);
  }
  const names = headerCells.map((cell) => showCell(cell ?? null));
  const isSameHeader = given.columns.every(({ index, header }) => header.trim() === (names[index] ?? '').trim());
  const columns = isSameHeader
    ? given.columns
    : proposeMapping(names, rows).map(({ column, name, meaning, mechanic, scale, confidence }) => ({
        index: column,
        header: name,
        meaning,
        ...(mechanic === undefined ? {} : { mechanicName: mechanic }),
        ...(scale === undefined ? {} : { scale }),
        confidence,
      }));
  const moreSheets = isSameHeader ? given.moreSheets : undefined;
  const mapping: ImportMapping = {
    ...given,
    sheet: sheet.name === '' ? null : sheet.name,
    columns,
    moreSheets,
    firstWeekday: context.fixedFirstWeekday ?? given.firstWeekday,
  };
  const form = await proposeForm(table, toTableMapping(mapping), {
    fixedFirstWeekday: context.fixedFirstWeekday,
    names,
  });
  return {
    mapping,
    // What the person has seen and sent is an answer; only what still stops the reading is asked again.
    form: { ...form, form: toReadingForm(mapping, form.form), questions: [] },
    fingerprint: fingerprintHeader(names),
    rows,
  };
}

export interface StagedReading {
  resolver: RangeResolver;
  findings: FindingWithCells[];
  rowsRead: number;
  rowsRefused: number;
  rowsRepaired: number;
  firstWeek: string | null;
  lastWeek: string | null;
}

/**
 * Reads every row with a complete mapping and lays those that can be taken into the staging file. `onProgress` gets the rows read so far and
 * may take its time. Throws UnreadableFileError.
 */
export async function stageRows(
  table: OpenedTable,
  mapping: ImportMapping,
  range: RangeSnapshot,
  choices: ResolverChoices,
  target: StagingFile,
  onProgress: (rows: number) => Promise<void>,
): Promise<StagedReading> {
  const tableMapping = toTableMapping(mapping);
  const held: { batch: Map<string, TableRow> } = { batch: new Map() };
  const proposedForm = {
    decimalSign: '.',
    dateOrder: 'day-first',
    yearNumberIs: 'week',
    weekDateIs: 'first-day',
    firstWeekday: 1,
  } as const;
  const reading = readImportRows(holdBatches(table, held), tableMapping, {
    kind: mapping.kind,
    form: toReadingForm(mapping, proposedForm),
    today: new Date().toISOString().slice(0, 10),
  });
  const resolver = new RangeResolver(range, choices);
  const findings: FindingWithCells[] = [];
  const untold = new Map<string, { verdict: ContractFinding['verdict']; count: number }>();
  const counts = { read: 0, refused: 0, repaired: 0 };
  let firstWeek: string | null = null;
  let lastWeek: string | null = null;
  const columnOf = new Map(tableMapping.columns.map(({ column, meaning }) => [meaning, column]));

  const tell = (finding: ContractFinding, withCells: boolean) => {
    if (findings.length >= mostFindings) {
      const known = untold.get(finding.kind) ?? { verdict: finding.verdict, count: 0 };
      untold.set(finding.kind, { ...known, count: known.count + 1 });
      return;
    }
    const row = withCells ? held.batch.get(`${finding.sheet ?? ''}|${finding.row}`) : undefined;
    findings.push({ ...finding, rowValues: row ? row.cells.map((cell) => showCell(cell)) : null });
  };

  for await (const { rows, findings: found } of reading.batches()) {
    const repairedRows = new Set<number>();
    for (const finding of found) {
      if (finding.verdict === 'refused') counts.refused += 1;
      if (finding.verdict === 'repaired') repairedRows.add(finding.row);
      tell(toContractFinding(finding), finding.verdict === 'refused');
    }
    counts.repaired += repairedRows.size;
    counts.read += rows.length + found.filter(({ verdict }) => verdict === 'refused').length;
    const taken: { row: ImportRow; item: number; location: number }[] = [];
    for (const row of rows) {
      const resolved = resolver.resolve(row);
      const place = (
        meaning: 'category' | 'item' | 'location',
        detail: string,
        kind: string,
        verdict: 'refused' | 'noticed',
      ) => {
        const blamed = columnOf.has(meaning) ? meaning : 'item';
        const before = row[blamed] ?? null;
        const column = columnOf.get(blamed);
        const cell = column === undefined ? null : `${nameColumn(column)}${row.row}`;
        tell(
          { sheet: row.sheet, cell, row: row.row, kind, before, after: null, verdict, detail },
          verdict === 'refused',
        );
      };
      if (!('item' in resolved)) {
        counts.refused += 1;
        place(resolved.meaning, resolved.detail, resolved.kind, 'refused');
        continue;
      }
      if (resolved.notice) place('item', resolved.notice.detail, resolved.notice.kind, 'noticed');
      if (firstWeek === null || row.weekStart < firstWeek) firstWeek = row.weekStart;
      if (lastWeek === null || row.weekStart > lastWeek) lastWeek = row.weekStart;
      taken.push({ row, item: resolved.item, location: resolved.location });
    }
    await target.append(taken);
    await onProgress(counts.read);
  }
  resolver.settle();
  for (const [kind, { verdict, count }] of untold) {
    findings.push(toNotice(kind, `${count} more rows of this kind; they aren’t listed one by one.`, verdict));
  }
  return {
    resolver,
    findings,
    rowsRead: counts.read,
    rowsRefused: counts.refused,
    rowsRepaired: counts.repaired,
    firstWeek,
    lastWeek,
  };
}

/** The same table, keeping the batch that was handed out last, so that a refused row can be given back as it stands in the file. */
function holdBatches(table: OpenedTable, held: { batch: Map<string, TableRow> }): OpenedTable {
  return {
    ...table,
    sheets: table.sheets.map((sheet) => {
      const batches = async function* () {
        for await (const batch of sheet.batches()) {
          held.batch = new Map(batch.map((row) => [`${row.sheet}|${row.row}`, row]));
          yield batch;
        }
      };
      return { ...sheet, batches, rows: () => flattenBatches(batches()) };
    }),
  };
}

function toContractFinding(finding: RowFinding): ContractFinding {
  const { sheet, cell, row, kind, before, after, verdict, detail } = finding;
  return { sheet: sheet === '' ? null : sheet, cell, row, kind, before, after, verdict, detail };
}

export function toNotice(
  kind: string,
  detail: string,
  verdict: ContractFinding['verdict'] = 'noticed',
): FindingWithCells {
  return { sheet: null, cell: null, row: null, kind, before: null, after: null, verdict, detail, rowValues: null };
}

function showCell(cell: CellValue | undefined): string {
  if (cell === null || cell === undefined) return '';
  return typeof cell === 'object' ? cell.date : String(cell);
}

const questionTexts: Readonly<Record<OpenQuestion, string>> = {
  'decimal-sign': 'Some figures could have a comma or a point as their decimal mark. Check the totals below.',
  'date-order': 'Dates could be day first or month first. Check the weeks below.',
  'week-or-month': 'Figures such as 202611 could be weeks or months. Check the weeks below.',
  'week-date-is': 'The dates are Sundays: say whether they are the first or the last day of the trading week.',
  'first-weekday':
    'The dates fall on several weekdays, or not on the first day of your trading week. Check the first weekday.',
};
