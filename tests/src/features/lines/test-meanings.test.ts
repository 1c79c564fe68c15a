import { expect, it } from 'vitest';
import type { FitDiagnosis } from '../../../../shared/contracts/lines.ts';
import { englishTexts } from '../../../../src/app/i18n.ts';
import { readTests } from '../../../../src/features/lines/test-meanings.ts';

const diagnosisOf = (over: Partial<FitDiagnosis>): FitDiagnosis => ({
  rows: 100,
  series: 2,
  items: 2,
  weeks: 50,
  parameters: 6,
  residualDegrees: 94,
  rSquaredWithin: 0.5,
  adjustedRSquaredWithin: 0.48,
  rSquared: 0.9,
  adjustedRSquared: 0.89,
  likelihood: null,
  effects: [],
  neweyWestLag: 3,
  condition: [{ index: 4, shares: [] }],
  durbinWatson: 2,
  breuschPagan: { statistic: 1, degrees: 3, p: 0.8 },
  ljungBox: { statistic: 1, degrees: 10, p: 0.99, lags: 10 },
  leverage: { threshold: 0.12, above: 3, largest: 0.3 },
  influential: [],
  ...over,
});
const meaningsOf = (over: Partial<FitDiagnosis>): string[] =>
  readTests(diagnosisOf(over)).map(({ meaning }) => meaning);

it('reads a quiet fit as quiet', () => {
  expect(meaningsOf({})).toEqual(['free', 'not-found', 'not-found', 'apart', 'counted']);
});

it('reads what is wrong by the bounds of common practice', () => {
  expect(
    meaningsOf({
      durbinWatson: 1.2,
      ljungBox: { statistic: 40, degrees: 10, p: 1e-5, lags: 10 },
      breuschPagan: { statistic: 40, degrees: 3, p: 1e-8 },
      condition: [
        { index: 1, shares: [] },
        { index: 45, shares: [] },
      ],
    }),
  ).toEqual(['lasting', 'found', 'found', 'inseparable', 'counted']);
  expect(meaningsOf({ durbinWatson: 2.8, condition: [{ index: 12, shares: [] }] })).toEqual([
    'swinging',
    'not-found',
    'not-found',
    'entangled',
    'counted',
  ]);
});

it('says so where a test isn’t defined, and has words for every meaning', () => {
  const none = { durbinWatson: null, ljungBox: null, breuschPagan: null, condition: [] };
  expect(meaningsOf(none)).toEqual(['unknown', 'unknown', 'unknown', 'unknown', 'counted']);
  const words = englishTexts.lines.tests.meaning as Record<string, Record<string, string>>;
  for (const over of [{}, none, { durbinWatson: 1 }, { durbinWatson: 3 }]) {
    for (const { test, meaning } of readTests(diagnosisOf(over))) expect(words[test]?.[meaning]).toBeTruthy();
  }
});
