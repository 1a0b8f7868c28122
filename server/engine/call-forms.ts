import type {Preparation} from './answers/header.ts';
import type {FormsReport} from './forms.ts';
import type {Hold, KeptForms} from './kept-forms.ts';
import type {MultipoleJob} from './multipole/multipole-job.ts';

/** The prepared forms of one call, from its first task to its end. */
export class CallForms {
  readonly #kept: KeptForms;
  #columns: Hold | undefined;
  #trees: Hold | undefined;
  /** Keys of what this call found, and of what it made. */
  readonly #found = new Set<string>();
  readonly #made = new Set<string>();

  /** @param earlier what reading the body did */
  constructor(kept: KeptForms, earlier?: FormsReport) {
    this.#kept = kept;
    if (earlier) this.#count(earlier);
  }

  /** What a body that is to be packed may need: any packed one. */
  get columns(): Hold {
    return (this.#columns ??= this.#kept.hold(['columns:']));
  }

  /** What the steps of a job may need: tables, and the trees of its own charges. */
  treesOf({charges}: MultipoleJob): Hold {
    const digests = charges.flatMap(({digest}) => (digest === undefined ? [] : [digest]));
    this.#trees ??= this.#kept.hold([TABLES, ...digests.map(digest => `tree:${digest}`)]);
    return this.#trees;
  }

  /** Takes over what a task did with the forms of a hold. */
  add(hold: Hold, report: FormsReport): void {
    this.#count(report);
    hold.add(report);
  }

  /** Undefined for a call too small to keep anything of. */
  get preparation(): Preparation | undefined {
    const hits = this.#found.size;
    const misses = this.#made.size;
    return hits + misses > 0 ? {hits, misses} : undefined;
  }

  release(): void {
    this.#columns?.release();
    this.#trees?.release();
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
