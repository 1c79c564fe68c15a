import { cpus, loadavg } from 'node:os';
import { parseArgs } from 'node:util';
import { forecastCategoryRow, forecastLineRow } from './bench/forecast-rows.ts';
import { fitGrowth, fitLarge, fitSmall, leaveOneOutRow } from './bench/least-squares-rows.ts';
import { saveCells } from './bench/save-rows.ts';
import { firstPage, readGrid } from './bench/server-rows.ts';
import { readXlsx, writePackRow } from './bench/workbook-rows.ts';
import type { BenchRow, Figure } from './bench/measure.ts';
import { listMissed, printFigures } from './bench/print-figures.ts';
import { ensureSystemPackages } from './debian-packages.ts';
import { PlainFailure, runCommand } from './plain-failure.ts';

const rows: readonly BenchRow[] = [
  fitSmall,
  fitLarge,
  leaveOneOutRow,
  fitGrowth,
  readXlsx,
  writePackRow,
  readGrid,
  saveCells,
  firstPage,
  forecastLineRow,
  forecastCategoryRow,
];

const usage = `npm run bench [-- rows… [--lines N]]
  --lines N: forecast-category with N lines in place of 500
  rows: ${rows.map(({ name }) => name).join(', ')} (all of them, in this order, if none is named)`;

function chooseRows(words: readonly string[]): readonly BenchRow[] {
  const unknown = words.find((word) => !rows.some(({ name }) => name === word));
  if (unknown !== undefined) throw new PlainFailure(`No row is called ${unknown}.\n\n${usage}`);
  return words.length === 0 ? rows : rows.filter(({ name }) => words.includes(name));
}

function readArguments() {
  try {
    return parseArgs({ allowPositionals: true, options: { lines: { type: 'string', default: '500' } } });
  } catch (error) {
    throw new PlainFailure(`${(error as Error).message}\n\n${usage}`);
  }
}

/** Ends with 1 if a must is missed. */
async function main(): Promise<number> {
  const { values, positionals } = readArguments();
  const lines = Number(values.lines);
  if (!Number.isInteger(lines) || lines < 16)
    throw new PlainFailure(`--lines takes a whole number from 16 up.\n\n${usage}`);
  const chosen = chooseRows(positionals);
  ensureSystemPackages('bench');
  const [processor] = cpus();
  console.log(
    `${processor?.model.trim() ?? 'processor unknown'}, ${cpus().length} cores, load ${loadavg()[0]!.toFixed(1)}; Node ${process.versions.node}`,
  );
  const figures: Figure[] = [];
  for (const row of chosen) {
    console.log(`${row.name} …`);
    figures.push(...(await row.run({ say: (line) => console.log(`  ${line}`), lines })));
  }
  printFigures(figures);
  const missed = listMissed(figures);
  console.log(missed.length === 0 ? '\nEvery must holds.' : `\n${missed.length} of ${figures.length} miss their must.`);
  return missed.length === 0 ? 0 : 1;
}

await runCommand(main);
