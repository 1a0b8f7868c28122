import type {Estimate} from '../../shared/api.ts';
import type {Plan} from './plan.ts';

// [pairs/ms] on one thread, from bench/direct-sum.ts; only for telling a caller what to expect.
const RATE = {potential: 2.4e5, field: 2e5, withErrors: 2.5e4};

/** [ms] that a call has besides its pairs: reading, packing, writing. */
const FIXED = 0.05;
const PER_ROW = 1e-3;

/** What a call costs, how it is computed, and about how long that takes on idle threads. */
export function estimateOf(plan: Plan, threads: number): Estimate {
  const {request, work, rows, pairs, route, method} = plan;
  const hasField = plan.operation === 'forces' || request.quantities?.some(q => q !== 'potential');
  const withBounds = request.accuracy?.bounds ? 1 / RATE.withErrors : 0;
  const perPair = 1 / (hasField ? RATE.field : RATE.potential) + withBounds;
  const lanes = route === 'inline' ? 1 : threads;
  const milliseconds = FIXED + PER_ROW * rows + (work * perPair) / lanes;
  return {pairs, route, method, milliseconds: Number(milliseconds.toPrecision(2))};
}
