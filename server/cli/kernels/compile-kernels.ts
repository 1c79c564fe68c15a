import asc from 'assemblyscript/asc';
import { projectFolder } from '../data-folder.ts';
import { PlainFailure } from '../plain-failure.ts';

/** The kernels of shared/statistics/simd, compiled anew, in base64. Throws PlainFailure with the compiler's words. */
export async function compileKernels(): Promise<string> {
  let compiled: Uint8Array | null = null;
  let said = '';
  const { error } = await asc.main(
    [
      'shared/statistics/simd/assembly/kernels.ts',
      ...['-O3', '--runtime', 'stub', '--enable', 'simd', '--noAssert', '--initialMemory', '1'],
      ...['--baseDir', projectFolder, '--outFile', 'kernels.wasm'],
    ],
    {
      stderr: {
        write: (chunk) => {
          said += typeof chunk === 'string' ? chunk : Buffer.from(chunk).toString();
        },
      },
      writeFile: (_name, contents) => {
        compiled = contents as Uint8Array;
      },
    },
  );
  if (error || !compiled) throw new PlainFailure(`The kernels could not be compiled:\n${said}`);
  return Buffer.from(compiled).toString('base64');
}
