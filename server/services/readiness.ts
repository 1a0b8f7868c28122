import {statfs} from 'node:fs/promises';

import type {Deps} from '../deps.ts';

const MIN_FREE_DISK = 0.05;
const MAX_QUEUE = 0.9;
const MAX_MILLISECONDS = 1500;

/** The part that keeps the service from working, or null. */
export async function findFault(deps: Deps): Promise<string | null> {
  const checks: Readonly<Record<string, () => Promise<boolean> | boolean>> = {
    database: () => canWrite(deps),
    queue: () => deps.engine.load().queued <= MAX_QUEUE * deps.engine.load().capacity,
    disk: () => hasDisk(deps),
    threads: () => canCompute(deps),
  };
  for (const [name, check] of Object.entries(checks)) {
    try {
      if (!(await check())) return name;
    } catch {
      // Whatever the part throws: it does not work.
      return name;
    }
  }
  return null;
}

function canWrite({database: {driver}}: Deps): boolean {
  // Takes the write lock and touches a page, without leaving a trace.
  driver.exec('BEGIN IMMEDIATE');
  try {
    driver.pragma(`user_version = ${Number(driver.pragma('user_version', {simple: true}))}`);
  } finally {
    driver.exec('ROLLBACK');
  }
  return true;
}

async function hasDisk({config}: Deps): Promise<boolean> {
  const {bavail, blocks} = await statfs(config.dataDir);
  return bavail >= MIN_FREE_DISK * blocks;
}

/** The smallest of all calls, sent through the threads although it could be computed at once. */
const PROBE = Buffer.from('{"bodies":[{"charges":{"x":[0],"y":[0],"z":[0],"charge":[1]}}]}');

async function canCompute({engine}: Deps): Promise<boolean> {
  const prepared = await engine.prepare('moments', PROBE);
  await engine.run(prepared, {signal: AbortSignal.timeout(MAX_MILLISECONDS)});
  return true;
}
