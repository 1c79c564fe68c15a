import { loadActor } from '../../features/accounts/accounts.service.ts';
import { runJob } from '../../features/jobs/jobs.service.ts';
import { gatherForecast, startForecast } from '../../features/plan/forecast.service.ts';
import { buildForecastCategoryJob } from '../../features/plan/plan.jobs.ts';
import { forecastLine } from '../../forecasting/forecast-line.ts';
import { jobHandlers } from '../../job-handlers.ts';
import { inSnapshot } from '../../lib/database.ts';
import { openLog } from '../../lib/log.ts';
import type { JobHandler } from '../../features/jobs/jobs.service.ts';
import { storeCategory, withBenchDatabase, type BenchDatabase } from './bench-database.ts';
import { inventCategory } from './invented-range.ts';
import {
  compareGrowth,
  median,
  noBounds,
  takeTurns,
  timeCalls,
  timeOnce,
  writeDuration,
  type BenchRow,
  type Figure,
} from './measure.ts';

const horizonWeeks = 13;
const minute = 60_000;

/** Milliseconds from asking for the forecast to its stored versions, as the worker process does it. */
async function timeForecast(
  { database, actor }: BenchDatabase,
  categoryId: number,
  handler: JobHandler,
): Promise<number> {
  const job = await startForecast(database, actor, categoryId, horizonWeeks);
  const handlers = { ...jobHandlers, 'forecast.category': handler };
  const length = await timeOnce(() => runJob({ database, log: openLog('warn'), handlers, loadActor }, job.id, true));
  const { rows } = await database.pool.query<{ state: string; lines: number }>(
    `select j.state, (select count(*)::int from plan_version v join product_line l on l.id = v.line_id where l.category_id = $2 and v.run_id = (j.result ->> 'runId')::int) as lines
     from job j where j.id = $1`,
    [job.id, categoryId],
  );
  if (rows[0]?.state !== 'done' || rows[0].lines === 0) {
    throw new Error(`the forecast ended as ${rows[0]?.state} with ${rows[0]?.lines} lines stored`);
  }
  return length;
}

export const forecastLineRow: BenchRow = {
  name: 'forecast-line',
  run: () =>
    withBenchDatabase(async (given) => {
      const categoryId = await storeCategory(given, inventCategory('Alone', 5));
      const { lines } = await inSnapshot(given.database, (tx) => gatherForecast(tx, categoryId, horizonWeeks));
      let turn = 0;
      const processor: number[] = [];
      const { line } = await takeTurns(
        {
          line: () => {
            const before = process.cpuUsage();
            const length = timeCalls(() => forecastLine(lines[turn++ % lines.length]!.input), 1);
            const { user, system } = process.cpuUsage(before);
            processor.push((user + system) / 1000);
            return length;
          },
        },
        5,
      );
      return [
        {
          row: 'forecast-line',
          work: 'one line, 12 × 156, search included, one core',
          ours: writeDuration(line),
          beside: `processor time ${writeDuration(median(processor))}`,
          value: line / 1000,
          unit: 's',
          must: { atMost: 3 },
          goal: { atMost: 1 },
        },
      ];
    }),
};

/** 1/16, 1/4 and the whole with two workers, the whole with one; each once, after a small category that starts the threads. */
export const forecastCategoryRow: BenchRow = {
  name: 'forecast-category',
  run: ({ say, lines: wholeLines }) =>
    withBenchDatabase(async (given) => {
      const sizes = [Math.round(wholeLines / 16), Math.round(wholeLines / 4), wholeLines];
      const categoryIds: number[] = [];
      for (const size of [2, ...sizes]) categoryIds.push(await storeCategory(given, inventCategory(`B${size}`, size)));
      say(`${wholeLines} lines of 12 items × 156 weeks stored`);
      const [small, ...measured] = categoryIds as [number, ...number[]];
      const two = buildForecastCategoryJob(2);
      const one = buildForecastCategoryJob(1);
      const lengths: number[] = [];
      await timeForecast(given, small, two);
      for (const [index, categoryId] of measured.entries()) {
        lengths.push(await timeForecast(given, categoryId, two));
        say(`${sizes[index]} lines, 2 workers: ${writeDuration(lengths[index]!)}`);
      }
      const whole = { size: wholeLines, length: lengths[2]! };
      await timeForecast(given, small, one);
      const alone = await timeForecast(given, measured[2]!, one);
      say(`${wholeLines} lines, 1 worker: ${writeDuration(alone)}`);
      const figures: Figure[] = [
        {
          row: 'forecast-category',
          work: `${wholeLines} lines, stored sales to stored forecasts, 2 workers`,
          ours: writeDuration(whole.length),
          beside: `1 worker ${writeDuration(alone)}`,
          value: alone / whole.length,
          unit: '× faster',
          ...noBounds,
          must: { atLeast: 1.7 },
        },
        {
          row: 'forecast-category',
          work: 'the same, in minutes',
          ours: writeDuration(whole.length),
          beside: '–',
          value: whole.length / minute,
          unit: 'min',
          must: { atMost: 15 },
          goal: { atMost: 5 },
        },
      ];
      for (const index of [0, 1]) {
        const part = { size: sizes[index]!, length: lengths[index]! };
        figures.push({
          row: 'growth',
          work: `forecast-category, ${wholeLines} lines against ${part.size}`,
          ours: writeDuration(whole.length),
          beside: writeDuration(part.length),
          value: compareGrowth(part, whole),
          unit: '× linear',
          must: { atMost: 1.15 },
          goal: null,
        });
      }
      return figures;
    }),
};
