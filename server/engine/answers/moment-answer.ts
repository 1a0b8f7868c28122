import type {MomentJob} from '../jobs.ts';
import {CompensatedSum} from '../compensated-sum.ts';
import {UNIT_ROUNDOFF} from '../exact.ts';
import {numbersIn, resultDigest} from './digests.ts';
import {answerTail, type AnswerHeader, type Timing} from './header.ts';

/**
 * Writes the answer of a moment job as JSON. In the request's units of charge and length, about the
 * point `about` of the common frame (default: its origin), with s = r − about:
 *
 *     charge Σ q      centre Σ q r / Σ q      dipole Σ q s      quadrupole Σ q (3 s_i s_j − s² δ_ij)
 *
 * The quadrupole is traceless (J. D. Jackson, Classical Electrodynamics, 3rd ed., eq. 4.9). The
 * centre is null where the total charge is zero to rounding: there is no such point.
 *
 * The result digest is over the numbers of `bodies`, `assembly` and `about` in the order of the
 * answer: charge, centre (one null, or three numbers), dipole, quadrupole xx, xy, xz, yy, yz, zz.
 */
export function momentAnswer(header: AnswerHeader, job: MomentJob, timing: Timing): Uint8Array {
  const {starts, about} = job;
  const bodies = header.bodyIds.map((id, body) => ({
    id,
    ...moments(job, starts[body], starts[body + 1]),
  }));
  const values = {
    bodies,
    assembly: moments(job, 0, starts[starts.length - 1]),
    about: xyz(about),
  };
  const text = JSON.stringify({...values, units: header.units}).slice(0, -1);
  return Buffer.from(text + answerTail(header, 0, resultDigest(numbersIn(values)), timing), 'utf8');
}

const STRIDE = 4;

const xyz = ([x, y, z]: readonly number[]) => ({x: x + 0, y: y + 0, z: z + 0});

function moments({charges, about}: MomentJob, from: number, to: number) {
  const total = new CompensatedSum();
  const sums = Array.from({length: 12}, () => new CompensatedSum());
  let size = 0;
  for (let i = from; i < to; i++) {
    const [x, y, z, q] = charges.subarray(STRIDE * i, STRIDE * (i + 1));
    const a = x - about[0];
    const b = y - about[1];
    const c = z - about[2];
    total.add(q);
    size += Math.abs(q);
    const terms = [q * x, q * y, q * z, q * a, q * b, q * c];
    const tensor = [
      q * (2 * a * a - b * b - c * c),
      3 * q * a * b,
      3 * q * a * c,
      q * (2 * b * b - a * a - c * c),
      3 * q * b * c,
      q * (2 * c * c - a * a - b * b),
    ];
    terms.forEach((term, n) => sums[n].add(term));
    tensor.forEach((term, n) => sums[6 + n].add(term));
  }
  const charge = total.value + 0;
  const isNeutral = Math.abs(charge) <= 4 * UNIT_ROUNDOFF * size;
  const [qx, qy, qz, px, py, pz, xx, xy, xz, yy, yz, zz] = sums.map(sum => sum.value + 0);
  return {
    charge,
    centre: isNeutral ? null : xyz([qx / charge, qy / charge, qz / charge]),
    dipole: {x: px, y: py, z: pz},
    quadrupole: {xx, xy, xz, yy, yz, zz},
  };
}
