import type {Logger} from 'pino';

import type {Config} from './config.ts';
import type {Database} from './db/open.ts';
import type {Engine} from './engine/pool.ts';
import type {GroupCommit} from './ledger/group-commit.ts';

/** What has a lifetime or a clock; made in main.ts and passed by hand. */
export interface Deps {
  readonly config: Config;
  readonly database: Database;
  readonly engine: Engine;
  /** For writes that many small calls make. */
  readonly groupCommit: GroupCommit;
  readonly log: Logger;
  readonly now: () => Date;
}
