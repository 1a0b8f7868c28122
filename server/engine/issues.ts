import type {ProblemCode} from '../../shared/api.ts';
import {ServiceError, type Issue} from '../errors.ts';
import {ISSUES_LISTED} from './limits.ts';

/** Collects the faults of a request: lists the first, counts all. */
export class Issues {
  readonly #listed: Issue[] = [];
  #count = 0;
  readonly #prefix: string;

  /** @param prefix what all pointers begin with, where the request is part of a larger body */
  constructor(prefix = '') {
    this.#prefix = prefix;
  }

  /** @param pointer RFC 6901, into the request as sent */
  add(pointer: string, code: ProblemCode, detail: string): void {
    this.#count++;
    if (this.#listed.length >= ISSUES_LISTED) return;
    this.#listed.push({pointer: this.#prefix + pointer, code, detail});
  }

  /** @throws ServiceError with the code of the first fault, if there is one */
  throwIfAny(): void {
    if (this.#count === 0) return;
    const [first] = this.#listed;
    throw new ServiceError(first.code, first.detail, {
      errors: this.#listed,
      errorCount: this.#count,
    });
  }
}
