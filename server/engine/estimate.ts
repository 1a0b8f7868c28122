import type {Estimate} from '../../shared/api.ts';
import {PAIR_WEIGHT} from './limits.ts';
import {multipoleMilliseconds} from './multipole/cost-model.ts';
import type {BoundKind, SumKind} from './methods/direct-sum.ts';
import {boundKind, sumKind} from './pack.ts';
import type {Plan} from './plan.ts';

// [evaluations/ms] on one thread, as bench/kernel-rates.ts prints them; they tell a caller what to
// expect and decide nothing.
const SUM_RATE: Record<SumKind, number> = {potential: 4.6e5, field: 4.2e5, fieldGradient: 1.5e5};
const BOUND_RATE: Record<BoundKind, number> = {none: Infinity, errors: 3.1e4, magnitudes: 2e5};

/** [ms] that a call has besides its evaluations: reading, packing, writing. */
const FIXED = 0.05;
const PER_ROW = 1e-3;

/** What a call costs, how it is computed, and about how long that takes on idle threads. */
export function estimateOf(plan: Plan, threads: number): Estimate {
  const {operation, request, work, rows, pairs, route, method} = plan;
  const sum = operation === 'forces' ? 'field' : sumKind(request);
  const evaluations = operation === 'moments' ? 0 : work / PAIR_WEIGHT[sum];
  const bounds = boundKind(request.accuracy?.bounds === true, evaluations);
  const perEvaluation = 1 / SUM_RATE[sum] + 1 / BOUND_RATE[bounds];
  const lanes = route === 'inline' ? 1 : threads;
  const tolerance = request.accuracy?.tolerance;
  const computing =
    method === 'multipole' && tolerance !== undefined
      ? onLanes(
          multipoleMilliseconds(plan.sources, plan.targets, tolerance, sum === 'field'),
          lanes,
        )
      : (evaluations * perEvaluation) / lanes;
  const milliseconds = FIXED + PER_ROW * rows + computing;
  return {pairs, route, method, milliseconds: Number(milliseconds.toPrecision(2))};
}

/** Trees and the steps between phases are made by one thread: about a third of the work. */
const SERIAL = 1 / 3;

/** How long work of the multipole method takes on several threads (Amdahl's law). */
const onLanes = (milliseconds: number, lanes: number): number =>
  milliseconds * (SERIAL + (1 - SERIAL) / lanes);
