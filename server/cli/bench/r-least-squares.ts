import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import type { LeastSquaresInput } from '../../../shared/statistics/regression/types.ts';
import { PlainFailure } from '../plain-failure.ts';
import { rscriptPath } from '../system-programs.ts';

/** R's .lm.fit on the same numbers, in a process that stays and times itself. */
export interface RPeer {
  coefficients: number[];
  /** Milliseconds per call. */
  time: (calls: number) => Promise<number>;
  stop: () => void;
}

/** Starts R on an unweighted input; the numbers go through a binary file. Throws PlainFailure if R ends early. */
export async function startRPeer({ design, rows, columns, response }: LeastSquaresInput): Promise<RPeer> {
  const folder = mkdtempSync(join(tmpdir(), 'fairweek-bench-'));
  const file = join(folder, 'design.bin');
  const values = new Float64Array(rows * (columns + 1));
  for (let i = 0; i < rows; i += 1) {
    for (let j = 0; j < columns; j += 1) values[j * rows + i] = design[i * columns + j]!;
    values[rows * columns + i] = response[i]!;
  }
  writeFileSync(file, new Uint8Array(values.buffer));
  const child = spawn(
    rscriptPath,
    ['--vanilla', join(import.meta.dirname, 'time-lm-fit.R'), file, String(rows), String(columns)],
    { stdio: ['pipe', 'pipe', 'inherit'] },
  );
  const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
  const readLine = async (): Promise<string> => {
    const { value, done } = (await lines.next()) as IteratorResult<string, undefined>;
    if (done) throw new PlainFailure('R ended before it answered; its message is above.');
    return value;
  };
  child.on('error', () => undefined);
  try {
    const coefficients = (await readLine()).trim().split(/\s+/).map(Number);
    return {
      coefficients,
      time: async (calls) => {
        child.stdin.write(`${calls}\n`);
        return Number(await readLine()) * 1000;
      },
      stop: () => child.stdin.end(),
    };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
