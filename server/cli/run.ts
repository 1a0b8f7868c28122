import {spawnSync} from 'node:child_process';

/**
 * Runs a command of a package; what it prints goes to standard error.
 *
 * @throws Error if it fails
 */
export function run(command: string, ...args: string[]): void {
  process.stderr.write(`> ${command} ${args.join(' ')}\n`);
  const {status} = spawnSync('npx', ['--no-install', command, ...args], {
    stdio: ['ignore', 2, 2],
    env: {...process.env, NG_CLI_ANALYTICS: 'false'},
  });
  if (status !== 0) throw new Error(`${command} ended with ${status}`);
}
