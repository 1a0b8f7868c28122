import type {Database as Driver} from 'better-sqlite3';

interface Waiting {
  readonly work: () => unknown;
  readonly done: (value: unknown) => void;
  readonly fail: (error: unknown) => void;
}

type Settled = () => void;

/**
 * Commits what small calls write in groups: all work that arrives in one turn of the event loop
 * shares a transaction, since a commit of its own costs each call as much as its entry does.
 *
 * A promise settles once the commit of its group is done. Work that throws leaves nothing behind
 * and harms no other; it must not await.
 */
export class GroupCommit {
  readonly #driver: Driver;
  #waiting: Waiting[] = [];

  constructor(driver: Driver) {
    this.#driver = driver;
  }

  run<Result>(work: () => Result): Promise<Result> {
    return new Promise<Result>((done, fail) => {
      if (this.#waiting.length === 0) setImmediate(() => this.#commit());
      this.#waiting.push({work, done: done as Waiting['done'], fail});
    });
  }

  #commit(): void {
    const group = this.#waiting;
    this.#waiting = [];
    let outcomes: Settled[] = [];
    const all = this.#driver.transaction(() => {
      outcomes = group.map(one => this.#outcomeOf(one));
    });
    try {
      all.immediate();
    } catch (error) {
      // The commit itself failed, a full disk for one: nothing of the group was written.
      outcomes = group.map(
        ({fail}) =>
          () =>
            fail(error),
      );
    }
    for (const settle of outcomes) settle();
  }

  #outcomeOf({work, done, fail}: Waiting): Settled {
    try {
      const value = work();
      return () => done(value);
    } catch (error) {
      // A refusal of one call. Its statement, or its savepoint, has undone what it wrote.
      return () => fail(error);
    }
  }
}
