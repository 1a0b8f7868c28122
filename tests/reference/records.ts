import {readFileSync} from 'node:fs';

interface PointCharge {
  readonly q: number;
  readonly pos: readonly [number, number, number];
}

/** A published value, with where it was published and how it was read. */
export interface PublishedRecord {
  readonly id: string;
  readonly topic: string;
  readonly quantity: string;
  /** SI, unless a member names its unit. */
  readonly inputs: {
    readonly charges?: readonly PointCharge[];
    readonly test?: PointCharge;
    readonly point?: readonly [number, number, number];
    readonly positions?: readonly (readonly [number, number, number])[];
    readonly charges_e_angstrom?: readonly (readonly [number, number, number, number])[];
    readonly point_A?: readonly [number, number, number];
    readonly n?: number;
    readonly N?: number;
    readonly q?: number;
    readonly a?: number;
    readonly b?: number;
    readonly r?: number;
    readonly V?: number;
    readonly r_A?: number;
    readonly r_OH_A?: number;
    readonly r_OM_A?: number;
    readonly qH_e?: number;
    readonly HOH_deg?: number;
  };
  readonly value: number;
  readonly unit: string;
  /** How well the value is known or printed. */
  readonly relTol: number;
  readonly source: string;
  readonly provenance: string;
  readonly note: string;
}

const file = new URL('./records.json', import.meta.url);
// The file is ours and holds nothing but records; `inputs` differ, and those of one are all optional.
const records = JSON.parse(readFileSync(file, 'utf8')) as readonly PublishedRecord[];

export function record(id: string): PublishedRecord {
  const found = records.find(each => each.id === id);
  if (!found) throw new RangeError(`no record ${id}`);
  return found;
}

export const recordsLike = (quantity: RegExp): readonly PublishedRecord[] =>
  records.filter(each => quantity.test(each.quantity));

/** [N·m²/C²] 1/(4π ε₀) with CODATA 2022: what records in units of `k_e` are multiplied by. */
export const k_e = record('CON-004').value;

/** Relative tolerance of a check: what the record is known to, but no less than 1e-12. */
export const toleranceOf = ({relTol}: PublishedRecord): number => Math.max(1e-12, relTol);
