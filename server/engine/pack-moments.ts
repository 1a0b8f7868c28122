import {unitOf} from '../../shared/units.ts';
import {answerHeader} from './answers/header.ts';
import {symbolOf} from './filled-request.ts';
import type {Memory} from './memory.ts';
import type {PackedCall} from './pack.ts';
import {packPlacement} from './placement.ts';
import {place, position} from './positions.ts';
import type {Plan} from './plan.ts';

const STRIDE = 4;

/**
 * Moments need no constant of nature, so they are computed in the request's own units of charge and
 * length: whole numbers stay whole.
 */
export function packMoments(plan: Plan, memory: Memory): PackedCall {
  const {request, sources} = plan;
  const length = unitOf('length', symbolOf(request, 'length'));
  const metre = unitOf('length', 'm');
  const charges = memory(STRIDE * sources);
  const starts = [0];
  const at = position();
  const used = request.bodies.map(body => packPlacement(body.placement, length));
  request.bodies.forEach(({charges: {x, y, z, charge}, placement}, index) => {
    // Taken as metres, the placement leaves the numbers of the request in their unit.
    const {rotation, shift, isIdentity} = packPlacement(placement, metre);
    const start = starts[index];
    for (let i = 0; i < x.length; i++) {
      at.x = x[i];
      at.y = y[i];
      at.z = z[i];
      if (!isIdentity) place(rotation, shift, 0, at);
      charges.set([at.x, at.y, at.z, charge[i]], STRIDE * (start + i));
    }
    starts.push(start + x.length);
  });
  return {
    header: answerHeader(plan, used),
    job: {
      kind: 'moment',
      charges,
      starts,
      about: request.about ?? [0, 0, 0],
      blocks: [0],
      out: new Float64Array(0),
      outAddress: undefined,
    },
  };
}
