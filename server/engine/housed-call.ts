import type {ForceJob, FieldJob} from './jobs.ts';
import type {Memory} from './memory.ts';
import type {MultipoleJob} from './multipole/multipole-job.ts';
import type {PackedCall} from './pack.ts';
import {copyColumns} from './sources/charge-columns.ts';
import type {PackedTargets} from './targets.ts';

/** A packed call with its numbers copied to `memory`, and room for results there. */
export function housedCall({header, job}: PackedCall, memory: Memory): PackedCall {
  switch (job.kind) {
    case 'field':
      return {header, job: {...housed(job, memory), targets: housedTargets(job.targets, memory)}};
    case 'force': {
      const probes = job.probes && copyColumns(job.probes, memory);
      return {header, job: {...housed(job, memory), ...(probes && {probes})}};
    }
    case 'multipole':
      return {header, job: housedMultipole(job, memory)};
    case 'moment':
      // Computed and written where it is read.
      return {header, job};
  }
}

function housedMultipole(job: MultipoleJob, memory: Memory): MultipoleJob {
  const field = {...housed(job.field, memory), targets: housedTargets(job.field.targets, memory)};
  return {...job, field};
}

function housed<J extends FieldJob | ForceJob>(job: J, memory: Memory): J {
  const out = memory(job.out.length);
  const charges = copyColumns(job.charges, memory);
  return {...job, charges, out, outAddress: memory.addressOf(out)};
}

function housedTargets(targets: PackedTargets, memory: Memory): PackedTargets {
  if (targets.kind !== 'points') return targets;
  const values = memory(targets.values.length);
  values.set(targets.values);
  return {...targets, values, address: memory.addressOf(values)};
}
