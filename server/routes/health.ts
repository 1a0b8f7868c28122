import type {Deps} from '../deps.ts';
import type {Handler} from '../http/call.ts';
import {findFault} from '../services/readiness.ts';
import {ServiceError} from '../errors.ts';

export const getLiveness = (): Handler<'getLiveness'> => () => ({body: {status: 'ok'}});

export const getReadiness =
  (deps: Deps): Handler<'getReadiness'> =>
  async () => {
    const fault = await findFault(deps);
    // No word of what it is: the answer is for anybody, the log for the operator.
    if (fault) {
      deps.log.warn({fault}, 'not ready');
      throw new ServiceError('not-ready', 'The service is not ready.', {retryAfter: 2});
    }
    return {body: {status: 'ok'}};
  };
