import {createHeap, Heap} from '../server/engine/heap.ts';
import {compiledKernels} from '../server/engine/kernels/compiled-kernels.ts';
import {instantiate, loadKernels} from '../server/engine/kernels/load.ts';
import {DirectSum, type BoundKind, type SumKind} from '../server/engine/methods/direct-sum.ts';
import type {Workplace} from '../server/engine/workplace.ts';
import {printMachine, show, summarise} from './compare.ts';
import {cpuRate} from './interleave.ts';
import {clustered, degenerate, randomCharges, uniform, type Shape} from './random-charges.ts';

// Question: how many million pairs a second of CPU time does one thread sum, by kind of sum and
// bound, by the shape of the input, and with and without compiled kernels? estimate.ts goes by it.
const CHARGES = 10_000;
const RUNS = 9;

const heap = new Heap(createHeap(2 ** 28));
const module = loadKernels();
const exported = module && instantiate(module, heap.memory);
if (!exported) throw new Error('no compiled kernels; npm run build makes them');
const memory = heap.memoryOf(1);
const workplaces: readonly (readonly [string, Workplace])[] = [
  ['compiled', {memory, compiled: compiledKernels(exported)}],
  ['plain', {memory}],
];

function measure(name: string, workplace: Workplace, kind: SumKind, bounds: BoundKind): void {
  for (const shape of [uniform, clustered, degenerate]) {
    const rate = rateOf(workplace, kind, bounds, shape);
    process.stdout.write(
      `${name.padEnd(10)}${`${kind}${bounds === 'none' ? '' : ` + ${bounds}`}`.padEnd(26)}${shape.name.padEnd(12)}${rate}\n`,
    );
  }
}

function rateOf(workplace: Workplace, kind: SumKind, bounds: BoundKind, shape: Shape): string {
  heap.release(1);
  const options = {
    kind,
    bounds,
    coincidenceDistance: 0,
    isExcluding: true,
    chargeRoundings: 1,
  };
  const sum = new DirectSum(randomCharges(CHARGES, shape, memory), options, 256, workplace);
  for (let i = 0; i < sum.capacity; i++) {
    [sum.positions.x[i], sum.positions.y[i], sum.positions.z[i]] = shape.point();
  }
  const run = (): number =>
    cpuRate(CHARGES * sum.capacity, () => sum.compute(0, sum.capacity, [0, CHARGES]));
  for (let warm = 0; warm < 4; warm++) run();
  return show(summarise(Array.from({length: RUNS}, run)), 0);
}

printMachine();
for (const [name, workplace] of workplaces) {
  for (const kind of ['potential', 'field', 'fieldGradient'] as const) {
    measure(name, workplace, kind, 'none');
  }
  for (const bounds of ['errors', 'magnitudes'] as const) {
    measure(name, workplace, 'field', bounds);
  }
}
