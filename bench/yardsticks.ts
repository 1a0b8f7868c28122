import {spawn, spawnSync} from 'node:child_process';
import {mkdtempSync, rmSync} from 'node:fs';
import {tmpdir} from 'node:os';
import {join} from 'node:path';

/** Rates of a program [million pairs a second]. */
export interface Rates {
  readonly cpu: number;
  readonly wall: number;
}

/** The AVX2 yardstick, compiled for this machine; undefined where there is no compiler or no AVX2. */
export class Avx2 {
  readonly #folder: string;

  private constructor(folder: string) {
    this.#folder = folder;
  }

  static compile(): Avx2 | undefined {
    const folder = mkdtempSync(join(tmpdir(), 'fieldstead-yardstick-'));
    const args = ['-O3', '-march=native', 'bench/yardsticks/avx2.cpp', '-o', join(folder, 'avx2')];
    const isCompiled = spawnSync('g++', args, {stdio: 'ignore'}).status === 0;
    const yardstick = new Avx2(folder);
    if (isCompiled && spawnSync(join(folder, 'avx2'), ['8', '8']).status === 0) return yardstick;
    yardstick.remove();
    return undefined;
  }

  /** Runs as many processes at once; the sum of their rates. */
  async run(charges: number, targets: number, repetitions = 1, processes = 1): Promise<Rates> {
    const args = [charges, targets, repetitions].map(String);
    const all = await Promise.all(
      Array.from({length: processes}, () => outputOf(join(this.#folder, 'avx2'), args)),
    );
    const rates = all.map(text => text.split(' ').map(Number));
    const sum = (n: number): number => rates.reduce((total, each) => total + each[n], 0);
    return {cpu: sum(0), wall: sum(1)};
  }

  remove(): void {
    rmSync(this.#folder, {recursive: true, force: true});
  }
}

/** Whether the numpy yardstick can run here. */
export const hasNumpy = (): boolean =>
  spawnSync('python3', ['-c', 'import numpy'], {stdio: 'ignore'}).status === 0;

/** [million pairs a second of CPU time] of numpy at its best block size */
export async function numpyRate(): Promise<number> {
  const env = {...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1'};
  return Number((await outputOf('python3', ['bench/yardsticks/blocks.py'], env)).split(' ')[0]);
}

function outputOf(
  command: string,
  args: readonly string[],
  env: NodeJS.ProcessEnv = process.env,
): Promise<string> {
  return new Promise((done, fail) => {
    const child = spawn(command, args, {stdio: ['ignore', 'pipe', 'inherit'], env});
    let text = '';
    child.stdout.setEncoding('utf8').on('data', (part: string) => (text += part));
    child.once('error', fail);
    child.once('close', status =>
      status === 0 ? done(text.trim()) : fail(new Error(`${command} ended with ${status}`)),
    );
  });
}
