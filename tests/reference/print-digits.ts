/**
 * Prints the correct digits of each NIST set (worst coefficient and worst standard error, of the QR kernel and of the fast one) and the agreement with R
 * on the larger fits, in digits: npx tsx tests/reference/print-digits.ts
 */
import { testLjungBox } from '../../shared/statistics/diagnostics/autocorrelation.ts';
import { testBreuschPagan } from '../../shared/statistics/diagnostics/breusch-pagan.ts';
import { computeVarianceInflation } from '../../shared/statistics/diagnostics/collinearity.ts';
import { computeDurbinWatson, computeDurbinWatsonBySeries } from '../../shared/statistics/diagnostics/durbin-watson.ts';
import {
  computeClassicalCovariance,
  computeClusteredCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeStandardErrors,
} from '../../shared/statistics/regression/covariance.ts';
import { fitLeastSquaresFast } from '../../shared/statistics/regression/fast-least-squares.ts';
import { summariseFit } from '../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../shared/statistics/regression/least-squares.ts';
import {
  buildChainModel,
  buildNistInput,
  buildPanelModel,
  readNistSets,
  type OrangeJuiceModel,
} from './build-designs.ts';
import { countWorstDigits, readColumn, readReferenceCsv, readReferenceJson } from './read-reference.ts';

function printRow(cells: readonly (string | number)[]): void {
  const texts = cells.map((cell, k) => {
    const text = typeof cell === 'number' ? cell.toFixed(1) : cell;
    return k === 0 ? text.padEnd(44) : text.padStart(12);
  });
  process.stdout.write(`${texts.join('')}\n`);
}

printRow(['NIST StRD', 'coefficients', 'errors', 'fast kernel', 'R']);
const ofR = new Map(readReferenceCsv('nist/lre_of_R.csv').map((row) => [row['set']!, row['min_LRE_coef_QR']!]));
for (const set of readNistSets()) {
  const input = buildNistInput(set);
  const fit = fitLeastSquares(input);
  const fast = fitLeastSquaresFast(input);
  const estimates = set.parameters.map((parameter) => parameter.estimate);
  printRow([
    `${set.name}${fast.isFromQr ? ' (fast: by QR)' : ''}`,
    countWorstDigits(
      fit.coefficients.map((value) => value!),
      estimates,
    ),
    countWorstDigits(
      computeStandardErrors(computeClassicalCovariance(input, fit), fit.rank),
      set.parameters.map((parameter) => parameter.se),
    ),
    countWorstDigits(
      fast.coefficients.map((value) => value!),
      estimates,
    ),
    Number(ofR.get(set.name)),
  ]);
}

interface TestValue {
  stat: number;
  p: number;
}

interface ModelReference {
  summary: Record<string, number>;
  vif: Record<string, number>;
  breusch_pagan_koenker: TestValue;
  breusch_pagan_original: TestValue;
  durbin_watson?: number;
  durbin_watson_within_store?: number;
  ljung_box_lag8?: TestValue;
}

function printModel(title: string, model: OrangeJuiceModel, coefficientFile: string, summaryFile: string): void {
  const table = readReferenceCsv(coefficientFile);
  const reference = readReferenceJson(summaryFile) as ModelReference;
  const { input } = model;
  const fit = fitLeastSquares(input);
  const summary = summariseFit(input, fit, true);
  const isPanel = reference.durbin_watson_within_store !== undefined;
  printRow(['']);
  printRow([title, 'agreement']);
  printRow([
    'coefficients',
    countWorstDigits(
      fit.coefficients.map((value) => value!),
      readColumn(table, 'estimate'),
    ),
  ]);
  const covariances: [string, Float64Array][] = [
    ['se_classical', computeClassicalCovariance(input, fit)],
    ['se_HC1', computeHeteroskedasticCovariance(input, fit, 'HC1')],
  ];
  if (isPanel) {
    covariances.push(['se_cluster_store', computeClusteredCovariance(input, fit, model.stores)]);
    covariances.push(['se_cluster_week', computeClusteredCovariance(input, fit, model.weeks)]);
  } else {
    covariances.push(['se_HC3', computeHeteroskedasticCovariance(input, fit, 'HC3')]);
    covariances.push(['se_NW_lag4', computeNeweyWestCovariance(input, fit, { lag: 4 })]);
    covariances.push(['se_NW_lag4_adjusted', computeNeweyWestCovariance(input, fit, { lag: 4, isAdjusted: true })]);
  }
  for (const [name, covariance] of covariances) {
    printRow([name, countWorstDigits(computeStandardErrors(covariance, fit.rank), readColumn(table, name))]);
  }
  const { r_squared, adj_r_squared, sigma, AIC, BIC, logLik } = reference.summary;
  printRow([
    'R², adjusted, sigma, AIC, BIC, logLik',
    countWorstDigits(
      [summary.rSquared, summary.adjustedRSquared, summary.sigma, summary.aic, summary.bic, summary.logLikelihood],
      [r_squared!, adj_r_squared!, sigma!, AIC!, BIC!, logLik!],
    ),
  ]);
  const expectedVif = Object.values(reference.vif);
  printRow([
    'variance inflation',
    countWorstDigits(
      computeVarianceInflation(input, fit)
        .slice(1, 1 + expectedVif.length)
        .map((value) => value!),
      expectedVif,
    ),
  ]);
  const koenker = testBreuschPagan(input, fit.residuals, 'koenker');
  const original = testBreuschPagan(input, fit.residuals, 'original');
  printRow([
    'Breusch–Pagan, both, statistic',
    countWorstDigits(
      [koenker.statistic, original.statistic],
      [reference.breusch_pagan_koenker.stat, reference.breusch_pagan_original.stat],
    ),
  ]);
  printRow([
    'Breusch–Pagan, both, p',
    countWorstDigits([koenker.p, original.p], [reference.breusch_pagan_koenker.p, reference.breusch_pagan_original.p]),
  ]);
  if (reference.durbin_watson !== undefined) {
    printRow(['Durbin–Watson', countWorstDigits([computeDurbinWatson(fit.residuals)], [reference.durbin_watson])]);
  }
  if (reference.durbin_watson_within_store !== undefined) {
    const within = computeDurbinWatsonBySeries(fit.residuals, model.stores, model.weeks, 'ignore');
    printRow(['Durbin–Watson within store', countWorstDigits([within], [reference.durbin_watson_within_store])]);
  }
  if (reference.ljung_box_lag8) {
    const { statistic, p } = testLjungBox(fit.residuals, 8);
    const { stat, p: expectedP } = reference.ljung_box_lag8;
    printRow(['Ljung–Box, lag 8, statistic and p', countWorstDigits([statistic, p], [stat, expectedP])]);
  }
}

printModel(
  'B04 chain against R (n = 113, k = 19)',
  buildChainModel(40, 152),
  'oj/B04_chain_coefficients.csv',
  'oj/B04_chain_lm.json',
);
printModel(
  'B04 panel against R (n = 9,019, k = 101)',
  buildPanelModel('B04', 40, 152),
  'oj/B04_panel_coefficients.csv',
  'oj/B04_panel_lm.json',
);
