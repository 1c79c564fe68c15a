import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { projectFolder } from './data-folder.ts';
import { compileKernels } from './kernels/compile-kernels.ts';
import { runCommand } from './plain-failure.ts';

await runCommand(async () => {
  const lines = (await compileKernels()).match(/.{1,100}/g) ?? [];
  const text = [
    '/** assembly/kernels.ts, compiled by `npm run kernels`; a test holds the two together. */',
    'export const kernelBytes =',
    `${lines.map((line) => `  '${line}'`).join(' +\n')};`,
    '',
  ].join('\n');
  writeFileSync(join(projectFolder, 'shared/statistics/simd/kernel-bytes.ts'), text);
  return 0;
});
