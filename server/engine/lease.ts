/**
 * Memory of a call: given back once the call has ended and the tasks that are out have come back,
 * since a task of a call that was given up writes until it sees that.
 */
export class Lease {
  #out = 0;
  #hasEnded = false;
  readonly #giveBack: () => void;

  constructor(giveBack: () => void) {
    this.#giveBack = giveBack;
  }

  async during<T>(task: () => Promise<T>): Promise<T> {
    this.#out++;
    try {
      return await task();
    } finally {
      this.#out--;
      this.#check();
    }
  }

  end(): void {
    this.#hasEnded = true;
    this.#check();
  }

  #check(): void {
    if (this.#hasEnded && this.#out === 0) this.#giveBack();
  }
}
