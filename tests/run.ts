import {spawnSync} from 'node:child_process';
import {existsSync, mkdtempSync, readFileSync} from 'node:fs';
import {tmpdir} from 'node:os';
import {join} from 'node:path';

import {findOrInstallChromium} from './support/chromium.ts';

/** One part of `npm test`: a command that passes or fails, or a runner that reports its counts. */
interface Step {
  readonly name: string;
  readonly command: readonly string[];
  /** Where the runner writes its JSON report. */
  readonly report?: string;
}

interface Counts {
  passed: number;
  failed: number;
}

const folder = mkdtempSync(join(tmpdir(), 'fieldstead-tests-'));
const reportOf = (name: string): string => join(folder, `${name}.json`);

function vitest(project: string): Step {
  const report = reportOf(project);
  return {
    name: `${project} tests`,
    command: [
      'vitest',
      'run',
      '--project',
      project,
      '--reporter=default',
      '--reporter=json',
      `--outputFile.json=${report}`,
    ],
    report,
  };
}

const steps: readonly Step[] = [
  {
    name: 'types of the contract are up to date',
    command: ['tsx', 'tests/support/api-is-current.ts'],
  },
  {name: 'contract: redocly', command: ['redocly', 'lint', 'openapi.yaml']},
  {
    name: 'contract: spectral',
    command: ['spectral', 'lint', 'openapi.yaml', '--fail-severity=hint'],
  },
  {name: 'types', command: ['tsc', '-p', 'tsconfig.json']},
  {name: 'lint', command: ['eslint', '.']},
  {name: 'format', command: ['prettier', '--check', '--log-level', 'warn', '.']},
  {name: 'build', command: ['tsx', 'server/cli/build.ts']},
  vitest('server'),
  {
    name: 'component tests',
    command: [
      'ng',
      'test',
      '--watch=false',
      '--reporters=default',
      '--reporters=json',
      `--output-file=${reportOf('components')}`,
    ],
    report: reportOf('components'),
  },
  vitest('browser'),
];

const chromium = findOrInstallChromium();
const only = process.argv.slice(2);
const total: Counts = {passed: 0, failed: 0};
const failures: string[] = [];
for (const step of steps) {
  if (only.length > 0 && !only.some(word => step.name.includes(word))) continue;
  process.stdout.write(`\n── ${step.name}\n`);
  const {status} = spawnSync('npx', ['--no-install', ...step.command], {
    stdio: ['ignore', 'inherit', 'inherit'],
    env: {
      ...process.env,
      CHROME_BIN: chromium ?? '',
      NG_CLI_ANALYTICS: 'false',
      REDOCLY_TELEMETRY: 'off',
    },
  });
  const counts = countsOf(step, status === 0);
  total.passed += counts.passed;
  total.failed += counts.failed;
  if (counts.failed > 0) failures.push(`${step.name}: ${counts.failed} failed`);
}
process.stdout.write(`\n${failures.map(line => `FAILED ${line}\n`).join('')}`);
process.stdout.write(`${total.passed} passed, ${total.failed} failed\n`);
process.exit(total.failed === 0 && total.passed > 0 ? 0 : 1);

/** A runner that ends badly without a failed test has failed all the same. */
function countsOf({report}: Step, hasSucceeded: boolean): Counts {
  if (!report) return {passed: Number(hasSucceeded), failed: Number(!hasSucceeded)};
  if (!existsSync(report)) return {passed: 0, failed: 1};
  const {numPassedTests, numFailedTests} = JSON.parse(readFileSync(report, 'utf8')) as {
    numPassedTests: number;
    numFailedTests: number;
  };
  const isUnexplained = !hasSucceeded && numFailedTests === 0;
  return {
    passed: numPassedTests,
    failed: numFailedTests + Number(isUnexplained || numPassedTests === 0),
  };
}
