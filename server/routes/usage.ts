import type {Deps} from '../deps.ts';
import {keyOf, personOf, type Handler} from '../http/call.ts';
import * as entries from '../ledger/entries.ts';
import {periodOf} from '../ledger/period.ts';
import * as usage from '../ledger/usage.ts';

export const getQuota =
  ({database}: Deps): Handler<'getQuota'> =>
  call => ({
    body: usage.quota(database, keyOf(call), call.at),
    left: entries.left(database.driver, keyOf(call), call.at),
  });

export const listUsage =
  ({database}: Deps): Handler<'listUsage'> =>
  async call => {
    const {since, until} = call.query;
    const key = keyOf(call);
    return {
      body: await usage.report(database, key.accountId, usage.rangeOf(since, until, call.at)),
      left: entries.left(database.driver, key, call.at),
    };
  };

export const getConsoleUsage =
  ({database}: Deps): Handler<'getConsoleUsage'> =>
  async call => {
    const {since, until} = call.query;
    const {accountId} = personOf(call);
    const {start, end} = periodOf(call.at);
    return {
      body: {
        ...(await usage.report(database, accountId, usage.rangeOf(since, until, call.at))),
        period: {start, end},
        account: usage.accountBalance(database, accountId, call.at),
      },
    };
  };
