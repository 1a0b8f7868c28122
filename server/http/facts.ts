import type {Response} from 'express';

import type {OperationId, ProblemCode} from '../../shared/api.ts';
import type {RequestIds} from './request-ids.ts';

/** What the log may say of a request: this list and nothing else. No header, address line, body or error. */
export interface Facts extends RequestIds {
  operation?: OperationId;
  key?: string;
  person?: string;
  pairs?: number | undefined;
  problem?: ProblemCode;
}

/** What the problem writer sends along with a refusal for now; nothing for the log. */
export interface RefusalHeaders {
  headersOf429?: () => Readonly<Record<string, string>>;
}

export function factsOf(res: Response): Facts & RefusalHeaders {
  return res.locals as Facts & RefusalHeaders;
}
