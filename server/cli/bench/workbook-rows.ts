import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { z } from 'zod';
import { PlainFailure } from '../plain-failure.ts';
import { median, takeTurns, timeOnce, writeDuration, type BenchRow, type Figure } from './measure.ts';
import type { WorkbookWork } from './workbook-process.ts';

const Took = z.object({ milliseconds: z.number(), megabytes: z.number() });

const processFile = join(import.meta.dirname, 'workbook-process.ts');

async function runWork(work: WorkbookWork, file: string): Promise<z.infer<typeof Took>> {
  return Took.parse(JSON.parse(await runProgram(process.execPath, ['--import', 'tsx', processFile, work, file])));
}

function runProgram(program: string, args: string[], keepsOutput = true): Promise<string> {
  return new Promise((resolve, reject) => {
    const child = spawn(program, args, { stdio: ['ignore', keepsOutput ? 'pipe' : 'ignore', 'inherit'] });
    let output = '';
    child.stdout?.on('data', (chunk: Buffer) => (output += chunk.toString()));
    child.on('error', reject);
    child.on('close', (code) =>
      code === 0 ? resolve(output) : reject(new PlainFailure(`${program} ended with code ${code}; see above.`)),
    );
  });
}

async function inFolder<T>(work: (folder: string) => Promise<T>): Promise<T> {
  const folder = mkdtempSync(join(tmpdir(), 'fairweek-bench-'));
  try {
    return await work(folder);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

export const readXlsx: BenchRow = {
  name: 'read-xlsx',
  run: () =>
    inFolder(async (folder) => {
      const figures: Figure[] = [];
      for (const strings of ['shared', 'inline'] as const) {
        const file = join(folder, `${strings}.xlsx`);
        await runWork(`make-${strings}`, file);
        const peaks: number[] = [];
        const lengths = await takeTurns(
          {
            ours: async () => {
              const { milliseconds, megabytes } = await runWork('read', file);
              peaks.push(megabytes);
              return milliseconds;
            },
            floor: () => timeOnce(() => runProgram('unzip', ['-p', file], false)),
          },
          5,
        );
        const work = `200,000 × 10, ${strings} strings`;
        figures.push(
          {
            row: 'read-xlsx',
            work,
            ours: writeDuration(lengths.ours),
            beside: `unzip -p ${writeDuration(lengths.floor)}`,
            value: lengths.ours / lengths.floor,
            unit: '× floor',
            must: { atMost: 6 },
            goal: { atMost: 3 },
          },
          {
            row: 'read-xlsx',
            work: `${work}, rise of the peak of memory`,
            ours: writeDuration(lengths.ours),
            beside: '–',
            value: median(peaks),
            unit: 'MB',
            must: { atMost: 100 },
            goal: null,
          },
        );
      }
      return figures;
    }),
};

export const writePackRow: BenchRow = {
  name: 'write-pack',
  run: () =>
    inFolder(async (folder) => {
      const peaks: number[] = [];
      const lengths = await takeTurns(
        {
          ours: async () => {
            const { milliseconds, megabytes } = await runWork('write-pack', join(folder, 'pack.xlsx'));
            peaks.push(megabytes);
            return milliseconds;
          },
          peer: async () => (await runWork('write-plain', join(folder, 'plain.xlsx'))).milliseconds,
        },
        5,
      );
      const beside = `exceljs streaming writer ${writeDuration(lengths.peer)}`;
      const ours = writeDuration(lengths.ours);
      const row = 'write-pack';
      const work = '20 sheets × 2,000 × 30 with formats';
      return [
        {
          row,
          work,
          ours,
          beside,
          value: lengths.ours / lengths.peer,
          unit: '× peer',
          must: { atMost: 1 },
          goal: { atMost: 0.5 },
        },
        {
          row,
          work: `${work}, rise of the peak of memory`,
          ours,
          beside: '–',
          value: median(peaks),
          unit: 'MB',
          must: { atMost: 250 },
          goal: { atMost: 120 },
        },
      ];
    }),
};
