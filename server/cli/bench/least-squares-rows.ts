import { drawGenerator } from '../../../seed-data/random.ts';
import { computeLeaveOneOutResiduals } from '../../../shared/statistics/diagnostics/influence.ts';
import { fitLeastSquaresFast } from '../../../shared/statistics/regression/fast-least-squares.ts';
import { fitLeastSquares } from '../../../shared/statistics/regression/least-squares.ts';
import type { LeastSquaresInput } from '../../../shared/statistics/regression/types.ts';
import {
  compareGrowth,
  noBounds,
  takeTurns,
  timeCalls,
  writeDuration,
  type BenchRow,
  type Bounds,
  type Figure,
} from './measure.ts';
import { startRPeer } from './r-least-squares.ts';

/** A constant, a third of 0/1 columns and normal ones, as the designs of a line have; row-major. */
function inventDesign(rows: number, columns: number): LeastSquaresInput {
  const draw = drawGenerator(20_261_201, `bench/${rows}/${columns}`);
  const design = new Float64Array(rows * columns);
  const response = new Float64Array(rows);
  for (let i = 0; i < rows; i += 1) {
    let sum = draw.normal();
    for (let j = 0; j < columns; j += 1) {
      const value = j === 0 ? 1 : j % 3 === 0 ? Number(draw.chance(0.2)) : draw.normal();
      design[i * columns + j] = value;
      sum += (value * ((j % 7) - 3)) / 5;
    }
    response[i] = sum;
  }
  return { design, rows, columns, response };
}

interface FitTimes {
  fast: number;
  kept: number;
  peer: number;
}

async function timeFits(
  input: LeastSquaresInput,
  rounds: number,
  calls: { fast: number; kept: number },
): Promise<FitTimes> {
  const peer = await startRPeer(input);
  try {
    for (const fit of [fitLeastSquaresFast(input), fitLeastSquares(input)]) {
      const gap = Math.max(...peer.coefficients.map((value, j) => Math.abs(value - (fit.coefficients[j] ?? NaN))));
      if (!(gap < 1e-9)) throw new Error(`the coefficients differ from R's by ${gap}`);
    }
    return await takeTurns(
      {
        fast: () => timeCalls(() => fitLeastSquaresFast(input), calls.fast),
        peer: () => peer.time(calls.fast),
        kept: () => timeCalls(() => fitLeastSquares(input), calls.kept),
      },
      rounds,
    );
  } finally {
    peer.stop();
  }
}

/**
 * The bounds are held by the kernel that the search over specifications runs thousands of times. The fit that is kept, once per line, goes through the
 * regression package and is refined to more digits; it is printed beside it without a bound.
 */
function describeFits(row: string, size: string, times: FitTimes, bounds: Bounds): Figure[] {
  const beside = `R .lm.fit ${writeDuration(times.peer)}`;
  return [
    {
      row,
      work: `fast kernel, ${size}`,
      ours: writeDuration(times.fast),
      beside,
      value: times.fast / times.peer,
      unit: '× R',
      ...bounds,
    },
    {
      row,
      work: `kept fit (package, refined), ${size}`,
      ours: writeDuration(times.kept),
      beside,
      value: times.kept / times.peer,
      unit: '× R',
      ...noBounds,
    },
  ];
}

export const fitSmall: BenchRow = {
  name: 'fit-small',
  run: async () =>
    describeFits('fit-small', '1,872 × 45', await timeFits(inventDesign(1872, 45), 15, { fast: 20, kept: 1 }), {
      must: { atMost: 1.5 },
      goal: { atMost: 0.7 },
    }),
};

export const fitLarge: BenchRow = {
  name: 'fit-large',
  run: async () => {
    const whole = await timeFits(inventDesign(20_000, 80), 9, { fast: 1, kept: 1 });
    return describeFits('fit-large', '20,000 × 80', whole, { must: { atMost: 1.5 }, goal: { atMost: 0.6 } });
  },
};

export const fitGrowth: BenchRow = {
  name: 'growth-fit',
  run: async () => {
    const sizes = [1250, 5000, 20_000];
    const inputs = sizes.map((rows) => inventDesign(rows, 80));
    const lengths = await takeTurns(
      Object.fromEntries(
        inputs.map((input, index) => [
          String(index),
          () => timeCalls(() => fitLeastSquaresFast(input), 16 >> (2 * index)),
        ]),
      ),
      9,
    );
    const whole = { size: 20_000, length: lengths['2']! };
    return [0, 1].map((index): Figure => ({
      row: 'growth-fit',
      work: `fast kernel, 20,000 × 80 against ${sizes[index]!.toLocaleString('en')} × 80`,
      ours: writeDuration(whole.length),
      beside: writeDuration(lengths[String(index)]!),
      value: compareGrowth({ size: sizes[index]!, length: lengths[String(index)]! }, whole),
      unit: '× linear',
      must: { atMost: 1.15 },
      goal: null,
    }));
  },
};

/** Residual of each row under the fit without it, by fitting once for each row: row i − 1 takes row i's place in turn. */
function refitWithoutEach({ design, rows, columns, response }: LeastSquaresInput): Float64Array {
  const others = design.slice(columns);
  const answers = response.slice(1);
  const residuals = new Float64Array(rows);
  for (let left = 0; left < rows; left += 1) {
    if (left > 0) {
      others.set(design.subarray((left - 1) * columns, left * columns), (left - 1) * columns);
      answers[left - 1] = response[left - 1]!;
    }
    const { coefficients } = fitLeastSquaresFast({ design: others, rows: rows - 1, columns, response: answers });
    let residual = response[left]!;
    for (let j = 0; j < columns; j += 1) residual -= design[left * columns + j]! * (coefficients[j] ?? NaN);
    residuals[left] = residual;
  }
  return residuals;
}

function leaveOneOut(input: LeastSquaresInput): (number | null)[] {
  const { residuals, hatDiagonal } = fitLeastSquaresFast(input, true);
  return computeLeaveOneOutResiduals(residuals, hatDiagonal!);
}

export const leaveOneOutRow: BenchRow = {
  name: 'loo',
  run: async () => {
    const input = inventDesign(1872, 45);
    const refitted = refitWithoutEach(input);
    const gap = Math.max(...leaveOneOut(input).map((value, i) => Math.abs((value ?? NaN) - refitted[i]!)));
    if (!(gap < 1e-9)) throw new Error(`leave-one-out residuals differ from those of refitting by ${gap}`);
    const lengths = await takeTurns(
      {
        byHat: () => timeCalls(() => leaveOneOut(input), 10),
        byRefit: () => timeCalls(() => refitWithoutEach(input), 1),
      },
      5,
    );
    return [
      {
        row: 'loo',
        work: 'leave-one-out residuals by leverages, 1,872 × 45',
        ours: writeDuration(lengths.byHat),
        beside: `refitting 1,872 times ${writeDuration(lengths.byRefit)}`,
        value: lengths.byRefit / lengths.byHat,
        unit: '× faster',
        must: { atLeast: 200 },
        goal: null,
      },
    ];
  },
};
