import {mkdirSync} from 'node:fs';

import {run} from './run.ts';

/** The compiled kernels; `server/engine/kernels/load.ts` finds them here. */
const KERNELS = 'dist/engine/kernels.wasm';

/** [pages of 64 KiB] of static data, below all that the heap hands out. */
const STATIC_PAGES = 1;
/** [pages] The most that 32-bit addresses reach: memories of any size up to it fit the import. */
const MOST_PAGES = 65_536;

/**
 * Compiles the AssemblyScript kernels.
 *
 * They allocate nothing and run on memory that threads share. Whatever instance is made last writes
 * the static data again, so that data must be constant and lies in the first page.
 */
export function buildKernels(): void {
  mkdirSync('dist/engine', {recursive: true});
  run(
    'asc',
    'server/engine/kernels/assembly/index.ts',
    ...['--outFile', KERNELS],
    ...['-O3', '--noAssert', '--runtime', 'stub', '--use', 'abort='],
    ...['--enable', 'simd', '--enable', 'threads', '--enable', 'bulk-memory'],
    ...['--sharedMemory', '--importMemory'],
    ...['--initialMemory', `${STATIC_PAGES}`, '--maximumMemory', `${MOST_PAGES}`],
  );
}

if (process.argv[1]?.endsWith('build-kernels.ts')) buildKernels();
