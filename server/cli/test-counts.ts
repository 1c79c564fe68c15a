import { z } from 'zod';

export interface Counts {
  passed: number;
  failed: number;
}

const VitestReport = z.object({
  testResults: z.array(
    z.object({
      status: z.string(),
      assertionResults: z.array(z.object({ status: z.string() })),
    }),
  ),
});

/** A test that did not run proves nothing, so it counts as failed; so does a file that could not be loaded. */
export function readVitestCounts(report: string): Counts {
  const { testResults } = VitestReport.parse(JSON.parse(report));
  const statuses = testResults.flatMap(({ assertionResults }) => assertionResults.map(({ status }) => status));
  const passed = statuses.filter((status) => status === 'passed').length;
  const brokenFiles = testResults.filter(
    ({ status, assertionResults }) =>
      status === 'failed' && assertionResults.every((assertion) => assertion.status === 'passed'),
  ).length;
  return { passed, failed: statuses.length - passed + brokenFiles };
}

const PlaywrightReport = z.object({
  stats: z.object({ expected: z.number(), unexpected: z.number(), flaky: z.number(), skipped: z.number() }),
  errors: z.array(z.unknown()),
});

/** A test that passes only when repeated counts as failed, as does one that did not run, and an error outside any test. */
export function readPlaywrightCounts(report: string): Counts {
  const { stats, errors } = PlaywrightReport.parse(JSON.parse(report));
  return { passed: stats.expected, failed: stats.unexpected + stats.flaky + stats.skipped + errors.length };
}
