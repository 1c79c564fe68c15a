import { readFileSync, writeFileSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { weekdayOf } from '../../shared/domain/weeks.ts';
import { chooseOrigins, groupByLine, runBacktest, type BacktestCell } from '../forecasting/backtest.ts';
import { breakDownAccuracy, type AccuracyRow } from '../forecasting/backtest-breakdown.ts';
import { summariseAccuracy, type AccuracySummary } from '../forecasting/backtest-summary.ts';
import { CanonicalFileError, readCanonicalCalendar, readCanonicalSales } from '../forecasting/canonical-sales.ts';

const USAGE =
  'usage: npm run backtest -- --sales FILE [--calendar FILE] --horizon H --origins N|WEEK,WEEK,… --out FILE [--verbose]';
const COLUMNS = 'line,item,location,origin,horizon,week,actual,mean,p2_5,p10,p50,p90,p97_5';

function main(): number {
  const { values } = parseArgs({
    options: {
      sales: { type: 'string' },
      calendar: { type: 'string' },
      horizon: { type: 'string' },
      origins: { type: 'string' },
      out: { type: 'string' },
      verbose: { type: 'boolean', default: false },
    },
  });
  const horizon = Number(values.horizon);
  if (!values.sales || !values.origins || !values.out || !(Number.isInteger(horizon) && horizon > 0)) {
    console.error(USAGE);
    return 2;
  }
  const rows = readCanonicalSales(readText(values.sales));
  const firstWeekday = weekdayOf(rows[0]?.sold.weekStart ?? '1970-01-05');
  const calendar = values.calendar ? readCanonicalCalendar(readText(values.calendar), firstWeekday) : [];
  const origins = chooseOrigins(rows, values.origins, horizon);
  const result = runBacktest(
    groupByLine(rows),
    calendar,
    origins,
    horizon,
    () => performance.now() / 1000,
    (line, origin, seconds, forecast) => {
      console.log(`${line} ${origin} ${seconds.toFixed(2)} s ${JSON.stringify(forecast.fit?.specification ?? null)}`);
      if (!values.verbose) return;
      console.log(JSON.stringify({ coefficients: forecast.fit?.coefficients, scores: forecast.fit?.scores }, null, 1));
      console.log(JSON.stringify(forecast.findings));
    },
  );
  writeFileSync(values.out, [COLUMNS, ...[...result.cells, ...result.totals].map(writeCell)].join('\n') + '\n');
  console.log(`${result.cells.length} series weeks, ${result.totals.length} line weeks`);
  console.table({
    series: rounded(summariseAccuracy(result.cells)),
    ...(result.totals.length > 0 ? { 'line total': rounded(summariseAccuracy(result.totals)) } : {}),
  });
  console.table(breakDownAccuracy(result.cells).map((row) => rounded(row)));
  console.log(`seconds per line and origin: ${result.secondsPerLine.toFixed(2)}`);
  return 0;
}

function readText(path: string): string {
  try {
    return readFileSync(path, 'utf8');
  } catch (error) {
    throw new CanonicalFileError(`${path} can't be read`, { cause: error });
  }
}

/** Figures to four decimals, words as they are. */
function rounded(scores: AccuracySummary | AccuracyRow): Record<string, number | string> {
  return Object.fromEntries(
    Object.entries<number | string>({ ...scores }).map(([key, value]) => [
      key,
      typeof value === 'number' ? Number(value.toFixed(4)) : value,
    ]),
  );
}

function writeCell(cell: BacktestCell): string {
  const numbers = [cell.actual, cell.mean, cell.p2_5, cell.p10, cell.p50, cell.p90, cell.p97_5];
  return [
    quoteField(cell.line),
    quoteField(cell.item),
    quoteField(cell.location),
    cell.origin,
    cell.horizon,
    cell.week,
    ...numbers.map((value) => Number(value.toPrecision(12))),
  ].join(',');
}

function quoteField(text: string): string {
  return /[",\n\r]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}

try {
  process.exitCode = main();
} catch (error) {
  if (!(error instanceof CanonicalFileError)) throw error;
  console.error(error.message);
  process.exitCode = 1;
}
