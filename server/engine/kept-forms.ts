import type {FormsReport, KnownForms, MadeForm} from './forms.ts';
import type {Heap} from './heap.ts';

interface Entry extends MadeForm {
  /** Calls that may be using it. */
  users: number;
  isCurrent: boolean;
}

/** Forms that a call holds on to until it ends. */
export interface Hold {
  readonly known: KnownForms;
  /** Takes over what a task made; this call may use it, others from now on too. */
  add(report: FormsReport): void;
  release(): void;
}

/**
 * Forms that are kept, however small: each lies in the heap in several pieces, of which it notes only
 * so many, and tasks are told of all that they may need.
 */
export const MOST_FORMS = 192;

/**
 * The forms that are kept, up to a number of bytes and of forms: those that were used longest ago go
 * first, and none that a call may be using.
 */
export class KeptForms {
  readonly #heap: Heap;
  readonly #limit: number;
  /** In the order of use, oldest first. */
  readonly #entries = new Map<string, Entry>();
  #bytes = 0;

  /** @param limit [bytes] */
  constructor(heap: Heap, limit: number) {
    this.#heap = heap;
    this.#limit = limit;
  }

  /** [bytes] that are kept at the moment. */
  get bytes(): number {
    return this.#bytes;
  }

  get count(): number {
    return this.#entries.size;
  }

  /** Holds all forms whose key begins with one of `prefixes`. */
  hold(prefixes: readonly string[]): Hold {
    const held: Entry[] = [];
    const known: Record<string, object> = {};
    for (const entry of [...this.#entries.values()]) {
      if (!prefixes.some(prefix => entry.key.startsWith(prefix))) continue;
      entry.users++;
      held.push(entry);
      known[entry.key] = entry.value;
    }
    return {
      known,
      add: report => {
        for (const key of report.used) this.#touch(key);
        for (const form of report.made) {
          const entry = this.#add(form);
          entry.users++;
          held.push(entry);
          known[form.key] = form.value;
        }
        this.#shrink();
      },
      release: () => {
        for (const entry of held.splice(0)) this.#leave(entry);
        this.#shrink();
      },
    };
  }

  /** Notes that a form was of use. */
  #touch(key: string): void {
    const entry = this.#entries.get(key);
    if (!entry) return;
    this.#entries.delete(key);
    this.#entries.set(key, entry);
  }

  #add(form: MadeForm): Entry {
    // Two calls may make the same; the first one is kept, the other ends with its call.
    const isCurrent = !this.#entries.has(form.key);
    const entry: Entry = {...form, users: 0, isCurrent};
    if (isCurrent) {
      this.#entries.set(form.key, entry);
      this.#bytes += form.bytes;
    }
    return entry;
  }

  #leave(entry: Entry): void {
    entry.users--;
    if (entry.users === 0 && !entry.isCurrent) this.#heap.release(entry.tag);
  }

  #shrink(): void {
    for (const [key, entry] of this.#entries) {
      if (this.#bytes <= this.#limit && this.#entries.size <= MOST_FORMS) return;
      if (entry.users > 0) continue;
      this.#entries.delete(key);
      this.#bytes -= entry.bytes;
      this.#heap.release(entry.tag);
    }
  }
}
