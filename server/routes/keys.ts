import type {Deps} from '../deps.ts';
import {personOf, type Handler} from '../http/call.ts';
import * as apiKeys from '../ledger/api-keys.ts';

const DEFAULT_OVERLAP_HOURS = 24;

export const listKeys =
  ({database}: Deps): Handler<'listKeys'> =>
  async call => ({
    body: {keys: await apiKeys.list(database, personOf(call).accountId, call.at)},
  });

export const createKey =
  ({database}: Deps): Handler<'createKey'> =>
  async call => ({
    status: 201,
    body: await apiKeys.create(database, personOf(call), call.body, call.at),
  });

export const deleteKey =
  ({database}: Deps): Handler<'deleteKey'> =>
  call => {
    apiKeys.revoke(database, personOf(call).accountId, call.path.id, call.at);
    return {status: 204};
  };

export const createRotation =
  ({database}: Deps): Handler<'createRotation'> =>
  call => ({
    status: 201,
    body: apiKeys.rotate(
      database,
      personOf(call),
      call.path.id,
      call.body?.overlapHours ?? DEFAULT_OVERLAP_HOURS,
      call.at,
    ),
  });
