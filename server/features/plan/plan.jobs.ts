import { Piscina } from 'piscina';
import { z } from 'zod';
import type { LineForecast, LineInput } from '../../forecasting/types.ts';
import { demandRight } from '../../lib/authorise.ts';
import { inSnapshot, inTransaction } from '../../lib/database.ts';
import type { JobHandler } from '../jobs/jobs.service.ts';
import { gatherForecast, saveForecast } from './forecast.service.ts';

const ForecastPayload = z.object({ categoryId: z.number().int(), horizonWeeks: z.number().int().min(1) });

/** Fits and forecasts every line of a category in worker threads, largest first, and saves all of them at once. */
export const forecastCategoryJob: JobHandler = buildForecastCategoryJob(2);

/** The same with as many worker threads as given, which are shared by all the jobs that this handler runs. */
export function buildForecastCategoryJob(threads: number): JobHandler {
  const forecastInThread = shareThreads(threads);
  return async (job) => {
    const { database, actor, payload, jobId } = job;
    const { categoryId, horizonWeeks } = ForecastPayload.parse(payload);
    demandRight(actor, 'generate-forecast', categoryId);
    await job.report(0, { key: 'forecastReading', values: {} });
    const gathered = await inSnapshot(database, (tx) => gatherForecast(tx, categoryId, horizonWeeks));

    const total = gathered.lines.length;
    let done = 0;
    const forecasts = new Array<LineForecast>(total);
    const bySize = gathered.lines
      .map(({ history }, index) => ({ index, size: history.reduce((sum, { sold }) => sum + sold.length, 0) }))
      .sort((a, b) => b.size - a.size);
    await job.report(0.02, { key: 'forecastLines', values: { done, total } });
    await Promise.all(
      bySize.map(async ({ index }) => {
        forecasts[index] = await forecastInThread(gathered.lines[index]!.input);
        done += 1;
        await job.report(0.02 + (0.95 * done) / total, { key: 'forecastLines', values: { done, total } });
      }),
    );

    const runId = await inTransaction(database, (tx) => saveForecast(tx, actor, gathered, forecasts, jobId));
    return { runId, lines: total };
  };
}

/** The threads start with the first line and end when they have been idle for a while; idle ones don't keep the process alive. */
function shareThreads(threads: number): (input: LineInput) => Promise<LineForecast> {
  let pool: Piscina<LineInput, LineForecast> | null = null;
  return (input) => {
    pool ??= new Piscina<LineInput, LineForecast>({
      filename: new URL('../../forecasting/line-worker.ts', import.meta.url).href,
      execArgv: ['--import', 'tsx'],
      minThreads: 0,
      maxThreads: threads,
      idleTimeout: 60_000,
    });
    return pool.run(input);
  };
}
