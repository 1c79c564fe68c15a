import type { FitDiagnosis } from '../../../shared/contracts/lines.ts';

/** What a test of the fit says in one sentence: a key of the texts, by bounds that are common practice. */
export interface TestReading {
  test: 'durbin-watson' | 'breusch-pagan' | 'ljung-box' | 'condition' | 'leverage';
  value: number | null;
  /** Degrees of freedom and tail probability of tests against χ². */
  degrees: number | null;
  p: number | null;
  meaning: string;
}

const significance = 0.05;
/** Durbin–Watson is about 2 − 2ρ: these stand for a correlation of ± 0.25 between neighbouring weeks. */
const lowWatson = 1.5;
const highWatson = 2.5;
/** Belsley, Kuh & Welsch 1980. */
const entangledIndex = 10;
const inseparableIndex = 30;

export function readTests(diagnosis: FitDiagnosis): TestReading[] {
  const { durbinWatson, breuschPagan, ljungBox, condition, leverage } = diagnosis;
  const largest = condition.at(-1)?.index ?? null;
  const watson = () => {
    if (durbinWatson === null) return 'unknown';
    if (durbinWatson < lowWatson) return 'lasting';
    return durbinWatson > highWatson ? 'swinging' : 'free';
  };
  const entangled = () => {
    if (largest === null) return 'unknown';
    if (largest < entangledIndex) return 'apart';
    return largest < inseparableIndex ? 'entangled' : 'inseparable';
  };
  const judge = (p: number | undefined) => {
    if (p === undefined) return 'unknown';
    return p < significance ? 'found' : 'not-found';
  };
  return [
    { test: 'durbin-watson', value: durbinWatson, degrees: null, p: null, meaning: watson() },
    {
      test: 'ljung-box',
      value: ljungBox?.statistic ?? null,
      degrees: ljungBox?.degrees ?? null,
      p: ljungBox?.p ?? null,
      meaning: judge(ljungBox?.p),
    },
    {
      test: 'breusch-pagan',
      value: breuschPagan?.statistic ?? null,
      degrees: breuschPagan?.degrees ?? null,
      p: breuschPagan?.p ?? null,
      meaning: judge(breuschPagan?.p),
    },
    { test: 'condition', value: largest, degrees: null, p: null, meaning: entangled() },
    { test: 'leverage', value: leverage.largest, degrees: null, p: null, meaning: 'counted' },
  ];
}
