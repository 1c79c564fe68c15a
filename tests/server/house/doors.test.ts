import { spawnSync } from 'node:child_process';
import { cpSync, mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { z } from 'zod';
import { projectFolder } from '../../../server/cli/data-folder.ts';

const bystanders: Record<string, string> = {
  'src/app/router.ts': 'export const a = 1;',
  'src/features/one/queries.ts': 'export const a = 1;',
  'src/features/one/components/Inner.ts': 'export const a = 1;',
  'server/features/one/one.service.ts': 'export const a = 1;',
  'server/features/one/one.repository.ts': 'export const a = 1;',
  'server/features/one/one.router.ts': 'export const a = 1;',
  'shared/domain/weeks.ts': 'export const a = 1;',
  'shared/contracts/plan.ts': 'export const a = 1;',
  'tests/setup/client.ts': 'export const a = 1;',
};

const refused: [rule: string, file: string, imports: string][] = [
  ['browser-knows-no-server', 'src/lib/one.ts', '../../server/features/one/one.service.ts'],
  ['server-knows-no-browser', 'server/lib/one.ts', '../../src/app/router.ts'],
  ['shared-stands-alone', 'shared/domain/one.ts', 'pg'],
  ['shared-stands-alone', 'shared/domain/two.ts', 'node:fs'],
  ['statistics-stand-alone', 'shared/statistics/one.ts', 'zod'],
  ['statistics-stand-alone', 'shared/statistics/two.ts', '../domain/weeks.ts'],
  ['matrix-packages-stay-in-statistics', 'src/lib/two.ts', 'ml-matrix'],
  ['client-feature-inside', 'src/features/two/one.ts', '../one/components/Inner.ts'],
  ['features-know-no-app', 'src/features/two/two.ts', '../../app/router.ts'],
  ['components-know-no-feature', 'src/components/One.ts', '../features/one/queries.ts'],
  ['server-feature-inside', 'server/features/two/one.ts', '../one/one.repository.ts'],
  ['routers-know-no-rows', 'server/features/one/two.router.ts', './one.repository.ts'],
  ['routers-know-no-rows', 'server/features/one/three.router.ts', 'sequelize'],
  ['services-know-no-http', 'server/features/one/two.service.ts', 'express'],
  ['forecasting-is-arithmetic', 'server/forecasting/one.ts', 'pg'],
  ['production-knows-no-tests', 'server/lib/two.ts', '../../tests/setup/client.ts'],
  ['production-needs-no-development-packages', 'server/lib/three.ts', 'vitest'],
  ['everything-resolves', 'server/lib/four.ts', './nowhere.ts'],
  ['no-cycles', 'server/lib/five.ts', './six.ts'],
];

const allowed: [file: string, imports: string][] = [
  ['src/features/three/one.ts', '../one/queries.ts'],
  ['src/features/three/two.ts', '../../../shared/contracts/plan.ts'],
  ['server/features/three/one.ts', '../one/one.service.ts'],
  ['server/features/three/two.ts', '../../../shared/domain/weeks.ts'],
  ['server/features/three/three.router.ts', '../one/one.service.ts'],
  ['shared/contracts/three.ts', 'zod'],
  ['shared/statistics/three.ts', 'ml-matrix'],
];

const Report = z.object({
  summary: z.object({
    violations: z.array(z.object({ from: z.string(), rule: z.object({ name: z.string() }) })),
  }),
});

let folder: string;
let violations: string[];

/** A small house of its own, whose every file breaks (or keeps) one rule, looked at by the project's own rules. */
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'doors-'));
  const importing = (target: string) => `import * as it from '${target}';\nexport const b = it;\n`;
  const files = {
    ...bystanders,
    'server/lib/six.ts': importing('./five.ts'),
    ...Object.fromEntries(refused.map(([, file, target]) => [file, importing(target)])),
    ...Object.fromEntries(allowed.map(([file, target]) => [file, importing(target)])),
  };
  for (const [file, text] of Object.entries(files)) {
    mkdirSync(dirname(join(folder, file)), { recursive: true });
    writeFileSync(join(folder, file), text);
  }
  for (const file of ['.dependency-cruiser.cjs', 'tsconfig.json', 'package.json']) {
    cpSync(join(projectFolder, file), join(folder, file));
  }
  symlinkSync(join(projectFolder, 'node_modules'), join(folder, 'node_modules'));
  const result = spawnSync(
    join(projectFolder, 'node_modules', '.bin', 'depcruise'),
    [
      '--config',
      '.dependency-cruiser.cjs',
      '--preserve-symlinks',
      '--output-type',
      'json',
      'src',
      'server',
      'shared',
      'tests',
    ],
    { cwd: folder, encoding: 'utf8', maxBuffer: 64 * 1024 * 1024 },
  );
  const report = Report.parse(JSON.parse(result.stdout));
  violations = report.summary.violations.map(({ from, rule }) => `${rule.name} ${from}`);
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('the doors of the house', () => {
  it.each(refused)('%s: refuses %s importing %s', (rule, file) => {
    expect(violations).toContain(`${rule} ${file}`);
  });

  it.each(allowed)('let %s import %s', (file) => {
    expect(violations.filter((violation) => violation.endsWith(` ${file}`))).toEqual([]);
  });
});
