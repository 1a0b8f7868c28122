import {sumError} from './exact.ts';

/**
 * A sum with the rounding error of every addition carried along: as if computed in twice the
 * precision. T. Ogita, S. M. Rump, S. Oishi, SIAM J. Sci. Comput. 26 (2005), Sum2.
 */
export class CompensatedSum {
  #sum = 0;
  #error = 0;

  add(term: number): void {
    const sum = this.#sum + term;
    this.#error += sumError(this.#sum, term, sum);
    this.#sum = sum;
  }

  get value(): number {
    return this.#sum + this.#error;
  }
}

export function totalOf(terms: readonly number[] | Float64Array): number {
  const sum = new CompensatedSum();
  for (const term of terms) sum.add(term);
  return sum.value;
}
