import type {Grid} from '../shared/api.ts';
import {defaultLimits} from '../server/engine/limits.ts';
import {blockCount, computeBlock} from '../server/engine/evaluate.ts';
import {createHeap, Heap} from '../server/engine/heap.ts';
import type {FieldJob} from '../server/engine/jobs.ts';
import {compiledKernels} from '../server/engine/kernels/compiled-kernels.ts';
import {instantiate, loadKernels} from '../server/engine/kernels/load.ts';
import {plainKernels} from '../server/engine/kernels/plain-kernels.ts';
import {targetBatch} from '../server/engine/kernels/target-batch.ts';
import {ownMemory} from '../server/engine/memory.ts';
import {pack} from '../server/engine/pack.ts';
import {plan} from '../server/engine/plan.ts';
import {createEngine} from '../server/engine/pool.ts';
import {printMachine} from './compare.ts';
import {cpuRate, interleave, printRatio, type Measure} from './interleave.ts';
import {random, randomCharges, scatter, uniform} from './random-charges.ts';
import {Avx2, hasNumpy, numpyRate} from './yardsticks.ts';

// Question: how near is the direct sum of V and E to what the machine can do, on one thread and on
// two, and what does all that surrounds the kernel cost? Ratios of the best of all rounds; rates on
// one thread are by CPU time.
const ROUNDS = 9;
const CHARGES = 8000;
const BATCH = 250;
const BATCHES = 12;
const PAIRS = CHARGES * BATCH * BATCHES;

const heap = new Heap(createHeap(2 ** 28));
const module = loadKernels();
const exported = module && instantiate(module, heap.memory);
if (!exported) throw new Error('no compiled kernels; npm run build makes them');
const compiled = compiledKernels(exported);
const memory = heap.memoryOf(1);

printMachine();
const avx2 = Avx2.compile();
try {
  await kernelAgainstYardsticks();
  await evaluationAgainstKernel();
  await twoThreadsAgainstOne();
} finally {
  avx2?.remove();
}

async function kernelAgainstYardsticks(): Promise<void> {
  const charges = randomCharges(CHARGES, uniform, memory);
  const batch = targetBatch(BATCH, memory);
  scatter(batch, uniform);
  const plainCharges = randomCharges(CHARGES, uniform, ownMemory);
  const plainBatch = targetBatch(BATCH, ownMemory);
  scatter(plainBatch, uniform);
  const sides: Record<string, Measure> = {
    compiled: () =>
      cpuRate(PAIRS, () => {
        for (let n = 0; n < BATCHES; n++) compiled.field(charges, 0, CHARGES, batch, 0, BATCH);
      }),
    plain: () =>
      cpuRate(PAIRS / 4, () => {
        for (let n = 0; n < BATCHES / 4; n++) {
          plainKernels.field(plainCharges, 0, CHARGES, plainBatch, 0, BATCH);
        }
      }),
  };
  if (avx2) sides['avx2'] = async () => (await avx2.run(CHARGES, BATCH * BATCHES)).cpu;
  if (hasNumpy()) sides['numpy'] = numpyRate;
  const best = await interleave(sides, ROUNDS);
  for (const [name, rate] of Object.entries(best)) {
    process.stdout.write(`  ${name.padEnd(12)}${rate.toFixed(0)} million pairs/s\n`);
  }
  const {compiled: ours, plain, avx2: yardstick, numpy} = best;
  if (yardstick) printRatio('compiled kernel ÷ AVX2', ours / yardstick, {atLeast: 0.45});
  printRatio('compiled kernel ÷ plain kernel', ours / plain, {atLeast: 1.85});
  if (numpy) printRatio('compiled kernel ÷ numpy', ours / numpy, {atLeast: 2.3});
}

/** 1,000 charges on a grid of 100³: positions, batches, results and the copy for a binary answer. */
async function evaluationAgainstKernel(): Promise<void> {
  const job = gridJob();
  const {charges, count} = job;
  const batch = targetBatch(256, memory);
  scatter(batch, uniform);
  const pairs = charges.count * count;
  const best = await interleave(
    {
      evaluate: () => cpuRate(pairs, () => evaluate(job)),
      kernel: () =>
        cpuRate(pairs, () => {
          for (let left = count; left > 0; left -= 256) {
            compiled.field(charges, 0, charges.count, batch, 0, Math.min(256, left));
          }
        }),
    },
    ROUNDS,
  );
  const ratio = best.kernel / best.evaluate;
  printRatio('1e3 charges, grid of 100³: evaluation ÷ kernel', ratio, {atMost: 1.05});
}

function evaluate(job: FieldJob): void {
  const scratch = 2;
  for (let block = 0; block < blockCount(job); block++) {
    computeBlock(job, block, () => false, {memory: heap.memoryOf(scratch), compiled});
    heap.release(scratch);
  }
  new Float64Array(job.out.length).set(job.out);
}

function gridJob(): FieldJob {
  const column = (): number[] => Array.from({length: 1000}, random);
  const bodies = [{charges: {x: column(), y: column(), z: column(), charge: column()}}];
  const grid: Grid = {
    origin: [0.0007, 0.0007, 0.0007],
    steps: [
      [0.01, 0, 0],
      [0, 0.01, 0],
      [0, 0, 0.01],
    ],
    counts: [100, 100, 100],
  };
  const limits = {...defaultLimits, answerRows: 1e6};
  const units = {length: 'mm', charge: 'nC'} as const;
  const {job} = pack(plan('fields', {units, bodies, targets: {grid}}, 0, limits), memory);
  if (job.kind !== 'field') throw new Error('expected a field job');
  return job;
}

/** The whole engine with one thread and with two, beside one and two processes of the yardstick. */
async function twoThreadsAgainstOne(): Promise<void> {
  if (!avx2) return;
  const column = (count: number): number[] => Array.from({length: count}, random);
  const [charges, targets] = [50_000, 20_000];
  const request = {
    bodies: [
      {
        charges: {
          x: column(charges),
          y: column(charges),
          z: column(charges),
          charge: column(charges),
        },
      },
    ],
    targets: {points: {x: column(targets), y: column(targets), z: column(targets)}},
  };
  const bytes = Buffer.from(JSON.stringify(request), 'utf8');
  const pairs = charges * targets;
  const engines = [1, 2].map(threads => createEngine({threads}));
  const run = async (n: number): Promise<number> => {
    const prepared = await engines[n].prepare('fields', bytes);
    const start = performance.now();
    await engines[n].run(prepared, {signal: new AbortController().signal});
    return pairs / (performance.now() - start) / 1000;
  };
  const best = await interleave(
    {
      oneThread: () => run(0),
      oneProcess: async () => (await avx2.run(CHARGES, 3000, 30)).wall,
      twoThreads: () => run(1),
      twoProcesses: async () => (await avx2.run(CHARGES, 3000, 30, 2)).wall,
    },
    ROUNDS,
  );
  await Promise.all(engines.map(engine => engine.close()));
  const ratio = best.twoThreads / best.oneThread / (best.twoProcesses / best.oneProcess);
  process.stdout.write(
    `  engine ${best.oneThread.toFixed(0)}, ${best.twoThreads.toFixed(0)}; yardstick ${best.oneProcess.toFixed(0)}, ${best.twoProcesses.toFixed(0)} million pairs/s\n`,
  );
  printRatio('(two threads ÷ one) ÷ (two yardsticks ÷ one)', ratio, {atLeast: 0.93});
}
