import {ServiceError} from '../../errors.ts';
import {Issues} from '../issues.ts';
import type {BlockReport, FieldJob, Stop} from '../jobs.ts';
import {COINCIDENCES_LISTED} from '../limits.ts';
import {canonicalNaN, resultDigest} from './digests.ts';
import {
  answerTail,
  usedCoincidenceDistance,
  type AccuracyFacts,
  type AnswerHeader,
  type Timing,
} from './header.ts';

/** Values written between two looks at `Stop`: a few milliseconds. */
const CHUNK = 8192;
const FLUSH = 65_536;

/**
 * Writes the answer of a field job, whose blocks are all done, as JSON.
 *
 * @returns undefined if it was stopped
 * @throws ServiceError coincident-target, where the request says so; number-overflow
 */
export function fieldAnswer(
  header: AnswerHeader,
  job: FieldJob,
  reports: readonly BlockReport[],
  timing: Timing,
  stop: Stop,
  accuracy: AccuracyFacts,
): Uint8Array | undefined {
  if (job.onCoincidence === 'reject') rejectCoincident(header, job, reports);
  canonicalNaN(job.out);
  checkOverflow(header, job, reports);

  const parts: Uint8Array[] = [];
  let text = '{"columns":{';
  for (let column = 0; column < job.columns.length; column++) {
    text += `${column === 0 ? '' : '],'}"${job.columns[column]}":[`;
    for (let from = 0; from < job.count; from += CHUNK) {
      const start = column * job.count + from;
      const end = Math.min(start + CHUNK, (column + 1) * job.count);
      text += `${from === 0 ? '' : ','}${numbers(job.out, start, end)}`;
      if (text.length < FLUSH) continue;
      if (stop()) return undefined;
      parts.push(Buffer.from(text, 'latin1'));
      text = '';
    }
  }
  let reach = 0;
  for (const report of reports) reach = Math.max(reach, report.reach);
  const rest = {
    count: job.count,
    units: header.units,
    coincident: coincidences(header, job, reports),
    coincidentCount: coincidentCount(reports),
  };
  const used = usedCoincidenceDistance(header, reach);
  const tail = answerTail(header, used, resultDigest(job.out), timing, accuracy);
  const last = Buffer.from(`${text}]},${JSON.stringify(rest).slice(1, -1)}${tail}`, 'utf8');
  return parts.length === 0 ? last : Buffer.concat([...parts, last]);
}

/** The digits of Number are the shortest that give the same double back, and are JSON but for NaN. */
function numbers(values: Float64Array, start: number, end: number): string {
  return values.subarray(start, end).join(',').replaceAll('NaN', 'null');
}

const coincidentCount = (reports: readonly BlockReport[]): number =>
  reports.reduce((sum, report) => sum + report.coincidentCount, 0);

interface Coincidence {
  readonly target: number;
  readonly body: string;
  readonly charge: number;
}

function coincidences(
  header: AnswerHeader,
  job: FieldJob,
  reports: readonly BlockReport[],
): Coincidence[] {
  const listed: Coincidence[] = [];
  for (const {coincident} of reports) {
    for (let n = 0; n < coincident.length && listed.length < COINCIDENCES_LISTED; n += 2) {
      const {body, charge} = placeOf(job.starts, coincident[n + 1]);
      listed.push({target: coincident[n], body: header.bodyIds[body], charge});
    }
  }
  return listed;
}

/** Which body a charge belongs to, and its index there. */
export function placeOf(starts: readonly number[], index: number): {body: number; charge: number} {
  let low = 0;
  let high = starts.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (starts[middle] <= index) low = middle;
    else high = middle;
  }
  return {body: low, charge: index - starts[low]};
}

function rejectCoincident(
  header: AnswerHeader,
  job: FieldJob,
  reports: readonly BlockReport[],
): void {
  const count = coincidentCount(reports);
  const issues = coincidences(header, job, reports).map(({target, body, charge}) => ({
    pointer:
      header.targets === 'points' ? `/targets/points/x/${target}` : `/targets/${header.targets}`,
    code: 'coincident-target' as const,
    detail: `Target ${target} lies on charge ${charge} of body ${JSON.stringify(body)}.`,
  }));
  if (count === 0) return;
  throw new ServiceError(
    'coincident-target',
    `${issues[0].detail} Move one of them, or ask for onCoincidence mask or exclude.`,
    {errors: issues.slice(0, 20), errorCount: count},
  );
}

function checkOverflow(header: AnswerHeader, job: FieldJob, reports: readonly BlockReport[]): void {
  const isMasking = job.onCoincidence === 'mask' && coincidentCount(reports) > 0;
  const issues = new Issues();
  job.columns.forEach((name, column) => {
    for (let i = 0; i < job.count; i++) {
      const value = job.out[column * job.count + i];
      if (Number.isFinite(value) || (isMasking && Number.isNaN(value))) continue;
      const pointer =
        header.targets === 'points' ? `/targets/points/x/${i}` : `/targets/${header.targets}`;
      issues.add(
        pointer,
        'number-overflow',
        `The value of ${name} at target ${i} is larger than a double can hold.`,
      );
    }
  });
  issues.throwIfAny();
}
