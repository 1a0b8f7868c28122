import type {Grid} from '../../shared/api.ts';
import {unitOf} from '../../shared/units.ts';
import {Forms} from '../../server/engine/forms.ts';
import {gridCount} from '../../server/engine/grid.ts';
import {createHeap, Heap} from '../../server/engine/heap.ts';
import {KeptForms} from '../../server/engine/kept-forms.ts';
import {blockCount, computeBlock} from '../../server/engine/evaluate.ts';
import type {FieldColumn, FieldJob, Job} from '../../server/engine/jobs.ts';
import {compiledKernels} from '../../server/engine/kernels/compiled-kernels.ts';
import {POSITION_COLUMNS} from '../../server/engine/kernels/layout.ts';
import {instantiate, loadKernels} from '../../server/engine/kernels/load.ts';
import {Arena} from '../../server/engine/multipole/arena.ts';
import {SCRATCH} from '../../server/engine/multipole/kernels.ts';
import {beginningOf, type MultipoleJob} from '../../server/engine/multipole/multipole-job.ts';
import {advance} from '../../server/engine/multipole/run.ts';
import {chargeColumns} from '../../server/engine/sources/charge-columns.ts';
import type {Memory} from '../../server/engine/memory.ts';
import {packTargets, type PackedTargets} from '../../server/engine/targets.ts';
import type {Workplace} from '../../server/engine/workplace.ts';

/** Positions [m], and charges [C] there. */
export interface Points {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
}
export interface Charges extends Points {
  readonly charge: Float64Array;
}

export interface Asked {
  readonly charges: Charges;
  readonly targets: Points | Grid;
  readonly tolerance?: number;
  readonly isField?: boolean;
  /** Where the charges may be known by. */
  readonly digest?: string;
  readonly changes?: Partial<MultipoleJob>;
  /** Whether the blocks of a phase are computed from the last to the first. */
  readonly isReversed?: boolean;
}

export interface Done {
  readonly method: 'direct' | 'multipole';
  readonly job: Job;
  /** V, Eₓ, E_y, E_z in SI, NaN where masked. */
  readonly columns: readonly Float64Array[];
  /** What near boxes make of E or, alone, of V, in few digits and without 1/(4π ε₀) [C/m², C/m]. */
  readonly near: readonly Float32Array[];
  readonly hits: number;
  readonly misses: number;
  /** [bytes] of the process when all was computed. */
  readonly resident: number;
  /** [ms] of processor time, by step: phase and level. */
  readonly steps: readonly {readonly name: string; readonly milliseconds: number}[];
}

const NEVER = (): boolean => false;

function packedTargets(targets: Points | Grid, memory: Memory): PackedTargets {
  if ('counts' in targets) return packTargets({grid: targets}, unitOf('length', 'm'), memory);
  const count = targets.x.length;
  const values = memory(POSITION_COLUMNS * count);
  [targets.x, targets.y, targets.z].forEach((column, n) => {
    values.set(column, n * count);
  });
  return {kind: 'points', values, count, address: memory.addressOf(values)};
}

/** The engine on one thread, below contract and JSON: for sums larger than a request may be. */
export function createWorkshop(bytes = 2 ** 31) {
  const module = loadKernels();
  if (!module) throw new Error('expected kernels; npm run build makes them');
  const heap = new Heap(createHeap(bytes));
  const exports = instantiate(module, heap.memory);
  if (!exports) throw new Error('expected memory for kernels');
  let lastTag = 0;
  let lastFormTag = 0;
  const kept = new KeptForms(heap, 2 ** 29);
  const multipole = {exports, scratch: heap.allocate(-1_000_000, SCRATCH)};
  const workplaceOf = (tag: number): Workplace => ({
    memory: heap.memoryOf(tag),
    compiled: compiledKernels(exports),
    multipole,
  });

  function fieldJob({charges, targets, tolerance, isField = true}: Asked, tag: number): FieldJob {
    const memory = heap.memoryOf(tag);
    const columns = chargeColumns(charges.x.length, memory);
    columns.x.set(charges.x);
    columns.y.set(charges.y);
    columns.z.set(charges.z);
    columns.q.set(charges.charge);
    const packed = packedTargets(targets, memory);
    const count = 'counts' in targets ? gridCount(targets.counts) : targets.x.length;
    const names: FieldColumn[] = isField
      ? ['potential', 'fieldX', 'fieldY', 'fieldZ']
      : ['potential'];
    const out = memory(names.length * count);
    const blocks = Array.from({length: Math.ceil(count / 4096)}, (_, n) => 4096 * n);
    return {
      kind: 'field',
      charges: columns,
      starts: [0, charges.x.length],
      targets: packed,
      count,
      sum: isField ? 'field' : 'potential',
      bounds: 'none',
      columns: names,
      relativePermittivity: 1,
      symbols: {charge: 'C', potential: 'V', field: 'V/m', fieldGradient: 'V/m²'},
      coincidenceDistance: 0,
      onCoincidence: 'mask',
      blocks: [...blocks, count],
      out,
      outAddress: memory.addressOf(out),
      ...(tolerance !== undefined && {tolerance}),
    };
  }

  function compute(asked: Asked): Done {
    const tag = ++lastTag;
    const scratch = ++lastTag;
    const hold = kept.hold(['table:', ...(asked.digest ? [`tree:${asked.digest}`] : [])]);
    const forms = new Forms(hold.known, heap, () => --lastFormTag);
    const steps: {name: string; milliseconds: number}[] = [];
    const timed = <T>(name: string, step: () => T): T => {
      const start = process.cpuUsage();
      const value = step();
      const {user, system} = process.cpuUsage(start);
      steps.push({name, milliseconds: (user + system) / 1000});
      return value;
    };
    try {
      const field = timed('pack', () => fieldJob(asked, tag));
      let job: Job = field;
      if (asked.tolerance !== undefined) {
        const {x, y, z, q, count} = field.charges;
        const part = {count, x, y, z, q, ranges: [0, count], digest: asked.digest};
        job = {...beginningOf(field, [part], 2e9), ...asked.changes};
      }
      for (;;) {
        const current: Job = job;
        const name: string = current.kind === 'multipole' ? current.phase : 'direct';
        timed(name, () => {
          const count = blockCount(current);
          for (let n = 0; n < count; n++) {
            const block = asked.isReversed ? count - 1 - n : n;
            computeBlock(current, block, NEVER, workplaceOf(scratch));
            heap.release(scratch);
          }
        });
        if (current.kind !== 'multipole' || current.phase === 'done') break;
        const spare = new Arena(heap, scratch);
        const tools = {...multipole, arena: new Arena(heap, tag), spare, forms, stop: NEVER};
        job = timed(`after ${name}`, () => advance(current, tools));
        heap.release(scratch);
      }
      const resident = process.memoryUsage().rss;
      const columns = field.columns.map((_, n) =>
        field.out.slice(n * field.count, (n + 1) * field.count),
      );
      const method = job.kind === 'multipole' ? 'multipole' : 'direct';
      const near = (job.kind === 'multipole' ? (job.near ?? []) : []).map(each => each.slice());
      const {hits, misses} = forms.report;
      hold.add(forms.report);
      return {method, job, columns, near, hits, misses, resident, steps};
    } finally {
      heap.release(tag);
      heap.release(scratch);
      hold.release();
    }
  }

  return {heap, kept, compute};
}
