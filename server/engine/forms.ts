import type {Heap} from './heap.ts';
import {Arena} from './multipole/arena.ts';

/**
 * Prepared forms: packed columns, trees and tables that are kept from call to call under a key that
 * says all they are made of. They lie in the heap, each under a tag of its own; the thread that
 * hands out tasks knows all of them (kept-forms.ts) and tells a task of those it may need.
 */
export interface MadeForm {
  readonly key: string;
  /** Of its memory in the heap. */
  readonly tag: number;
  readonly bytes: number;
  /** Plain data. */
  readonly value: object;
}

/** What a task did with forms. */
export interface FormsReport {
  readonly made: readonly MadeForm[];
  /** Keys of those that were known. */
  readonly used: readonly string[];
  readonly hits: number;
  readonly misses: number;
}

export type KnownForms = Readonly<Record<string, object>>;

/** The forms of one task. */
export class Forms {
  readonly #known: KnownForms;
  readonly #heap: Heap;
  readonly #newTag: () => number;
  readonly #made: MadeForm[] = [];
  readonly #used: string[] = [];
  #hits = 0;
  #misses = 0;

  constructor(known: KnownForms, heap: Heap, newTag: () => number) {
    this.#known = known;
    this.#heap = heap;
    this.#newTag = newTag;
  }

  /** A form of charges: kept, or made and then kept. The caller says what type lies under a key. */
  get<T extends object>(key: string, make: (arena: Arena) => T): T {
    const found = this.#find(key);
    if (found) this.#hits++;
    else this.#misses++;
    return (found ?? this.#make(key, make)) as T;
  }

  /** The same of what belongs to no charges and so counts as neither hit nor miss. */
  shared<T extends object>(key: string, make: (arena: Arena) => T): T {
    return (this.#find(key) ?? this.#make(key, make)) as T;
  }

  get report(): FormsReport {
    return {made: this.#made, used: this.#used, hits: this.#hits, misses: this.#misses};
  }

  /** Gives back what was made by a task that failed. */
  discard(): void {
    for (const {tag} of this.#made) this.#heap.release(tag);
  }

  #find(key: string): object | undefined {
    const own = this.#made.find(each => each.key === key);
    if (own) return own.value;
    if (key in this.#known) this.#used.push(key);
    return this.#known[key];
  }

  #make(key: string, make: (arena: Arena) => object): object {
    const tag = this.#newTag();
    const arena = new Arena(this.#heap, tag);
    try {
      const value = make(arena);
      this.#made.push({key, tag, bytes: arena.bytes, value});
      return value;
    } catch (error) {
      // Whatever it was, what lies there is of no use.
      this.#heap.release(tag);
      throw error;
    }
  }
}
