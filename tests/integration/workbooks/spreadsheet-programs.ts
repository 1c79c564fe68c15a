import { execFileSync } from 'node:child_process';
import { mkdirSync } from 'node:fs';
import { basename, extname, join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { officePath, systemPythonPath } from '../../../server/cli/system-programs.ts';

export interface SeenCell {
  sheet: string;
  row: number;
  column: number;
  /** `n` number, `s` text, `b` truth, `d` date, `e` error, `f` formula, as openpyxl names them. */
  type: string;
  /** Formula text where the cell is one, else its value; dates as `YYYY-MM-DD`. */
  value: string | number | boolean;
  /** Stored result. */
  result: string | number | boolean | null;
}

/** All filled cells of a workbook, as openpyxl (Debian's python3-openpyxl) reads them. */
export function readWithOpenpyxl(path: string): SeenCell[] {
  const output = runPython(
    `
import json, sys, datetime, openpyxl
def plain(value):
    return value.strftime('%Y-%m-%d') if isinstance(value, (datetime.date, datetime.datetime)) else value
formulas = openpyxl.load_workbook(sys.argv[1])
results = openpyxl.load_workbook(sys.argv[1], data_only=True)
cells = []
for sheet in formulas.worksheets:
    for row in sheet.iter_rows():
        for cell in row:
            if cell.value is not None:
                cells.append(dict(sheet=sheet.title, row=cell.row, column=cell.column, type=cell.data_type, value=plain(cell.value),
                                  result=plain(results[sheet.title].cell(cell.row, cell.column).value)))
print(json.dumps(cells))
`,
    [path],
  );
  return JSON.parse(output) as SeenCell[];
}

/** Saves a copy whose formulas have no stored results, so that whoever opens it has to calculate. */
export function dropStoredResults(path: string, copy: string): void {
  runPython('import sys, openpyxl\nopenpyxl.load_workbook(sys.argv[1]).save(sys.argv[2])', [path, copy]);
}

/** Writes a workbook of plain cells with openpyxl; dates are given as `{ date }`, formulas as texts that begin with `=`. */
export function writeWithOpenpyxl(path: string, sheets: Record<string, unknown[][]>): void {
  runPython(
    `
import json, sys, datetime, openpyxl
book = openpyxl.Workbook()
book.remove(book.active)
for name, rows in json.loads(sys.argv[2]).items():
    sheet = book.create_sheet(name)
    for row in rows:
        sheet.append([datetime.date.fromisoformat(cell['date']) if isinstance(cell, dict) else cell for cell in row])
book.save(sys.argv[1])
`,
    [path, JSON.stringify(sheets)],
  );
}

function runPython(script: string, args: string[]): string {
  return execFileSync(systemPythonPath, ['-c', script, ...args], { encoding: 'utf8', maxBuffer: 256 * 1024 * 1024 });
}

/** Opens a file in LibreOffice without a screen and saves it in another format; returns the new file. */
export function convertWithLibreOffice(path: string, format: string, folder: string): string {
  const extension = format.split(':')[0] ?? format;
  const target = join(folder, `from-libreoffice-${extension}`);
  mkdirSync(target, { recursive: true });
  execFileSync(
    officePath,
    [
      `-env:UserInstallation=${pathToFileURL(join(folder, 'libreoffice-profile')).href}`,
      '--headless',
      '--convert-to',
      format,
      '--outdir',
      target,
      path,
    ],
    { stdio: 'pipe', timeout: 180_000 },
  );
  return join(target, `${basename(path, extname(path))}.${extension}`);
}
