import type {Preparation} from './answers/header.ts';
import type {FormsReport, KnownForms} from './forms.ts';
import type {Hold, KeptForms} from './kept-forms.ts';
import type {Job} from './jobs.ts';

/** The prepared forms of one call, from its first task to its end. */
export class CallForms {
  readonly #kept: KeptForms;
  readonly #holds: Hold[] = [];
  /** Keys of what this call found, and of what it made. */
  readonly #found = new Set<string>();
  readonly #made = new Set<string>();
  #hasTrees = false;

  /** @param earlier what reading the body did */
  constructor(kept: KeptForms, earlier?: FormsReport) {
    this.#kept = kept;
    if (earlier) this.#count(earlier);
    this.#holds.push(kept.hold(['columns:', 'table:']));
  }

  get known(): KnownForms {
    return Object.assign({}, ...this.#holds.map(({known}) => known)) as KnownForms;
  }

  /** Takes hold of the trees of the charges of a job, once it is known. */
  holdTrees(job: Job): void {
    if (this.#hasTrees || job.kind !== 'multipole') return;
    this.#hasTrees = true;
    const digests = job.charges.flatMap(({digest}) => (digest === undefined ? [] : [digest]));
    this.#holds.push(this.#kept.hold(digests.map(digest => `tree:${digest}`)));
  }

  add(report: FormsReport): void {
    this.#count(report);
    this.#holds[0].add(report);
  }

  /** Undefined for a call too small to keep anything of. */
  get preparation(): Preparation | undefined {
    const hits = this.#found.size;
    const misses = this.#made.size;
    return hits + misses > 0 ? {hits, misses} : undefined;
  }

  release(): void {
    for (const hold of this.#holds) hold.release();
  }

  /** What a call made itself and found again is no hit; tables belong to no charges. */
  #count({made, used}: FormsReport): void {
    for (const {key} of made) if (!key.startsWith(TABLES)) this.#made.add(key);
    for (const key of used) {
      if (!key.startsWith(TABLES) && !this.#made.has(key)) this.#found.add(key);
    }
  }
}

const TABLES = 'table:';
