import {availableParallelism} from 'node:os';
import {resolve} from 'node:path';

/** Every limit of the service, in one place; tests set their own. */
export interface Limits {
  readonly urlBytes: number;
  readonly headerBytes: number;
  readonly bodyBytes: number;
  /** Bodies of console forms [bytes]. */
  readonly formBytes: number;
  readonly headersMilliseconds: number;
  readonly requestMilliseconds: number;
  readonly keepAliveMilliseconds: number;
  /** After a refused body: how much more is read and thrown away, and for how long. */
  readonly discardBytes: number;
  readonly discardMilliseconds: number;
  /** Calls without a valid key from one address, in 10 s. */
  readonly strangerCalls: number;
  /** Failed sign-ins for one person from one address in 15 minutes, and from one address in an hour. */
  readonly signInFailures: number;
  readonly signInFailuresOfAddress: number;
  readonly inlinePairs: number;
  readonly inlineRows: number;
  readonly inlineBytes: number;
  readonly synchronousPairs: number;
  readonly answerRows: number;
  readonly requestRows: number;
  readonly queuedCalls: number;
  readonly computeMilliseconds: number;
  /** Prepared forms (packed bodies, trees, tables) that are kept from call to call [bytes]. */
  readonly keptBytes: number;
  readonly heapBytes: number;
}

export interface Config {
  readonly port: number;
  readonly host: string;
  readonly dataDir: string;
  readonly threads: number;
  readonly logLevel: string;
  /** Without a slash at the end; what links, `Location` and problem types begin with. */
  readonly publicUrl: string;
  /** Proxies in front of the service whose X-Forwarded-For is believed. */
  readonly trustProxy: number;
  readonly smtpUrl: string | null;
  readonly isDemo: boolean;
  /** Whether browsers send Secure cookies here. */
  readonly isSecureOrigin: boolean;
  readonly limits: Limits;
}

const KIB = 1024;
const MIB = 1024 * KIB;

export const defaultLimits: Limits = {
  urlBytes: 8 * KIB,
  headerBytes: 16 * KIB,
  bodyBytes: 8 * MIB,
  formBytes: 64 * KIB,
  headersMilliseconds: 10_000,
  requestMilliseconds: 60_000,
  keepAliveMilliseconds: 75_000,
  discardBytes: 16 * MIB,
  discardMilliseconds: 5000,
  strangerCalls: 50,
  signInFailures: 5,
  signInFailuresOfAddress: 100,
  inlinePairs: 5e4,
  inlineRows: 500,
  inlineBytes: 64 * KIB,
  synchronousPairs: 2e9,
  answerRows: 2e5,
  requestRows: 1e5,
  queuedCalls: 200,
  computeMilliseconds: 30_000,
  keptBytes: 512 * MIB,
  heapBytes: 2048 * MIB,
};

/**
 * Reads the settings from the environment.
 *
 * @throws Error naming the setting that makes no sense
 */
export function readConfig(env: NodeJS.ProcessEnv, limits: Partial<Limits> = {}): Config {
  const port = whole(env, 'PORT', 4300, 0, 65_535);
  const host = env['HOST'] || '127.0.0.1';
  const publicUrl = (env['PUBLIC_URL'] || `http://${bracketed(host)}:${port}`).replace(/\/+$/, '');
  if (!URL.canParse(publicUrl)) throw new Error(`PUBLIC_URL is ${publicUrl}; expected an address`);
  return {
    port,
    host,
    dataDir: resolve(env['DATA_DIR'] || 'data'),
    threads: whole(env, 'THREADS', availableParallelism(), 1, 256),
    logLevel: env['LOG_LEVEL'] || 'info',
    publicUrl,
    trustProxy: whole(env, 'TRUST_PROXY', 0, 0, 16),
    smtpUrl: env['SMTP_URL'] || null,
    isDemo: env['DEMO'] ? env['DEMO'] !== '0' : isLoopback(host),
    isSecureOrigin: isSecure(new URL(publicUrl)),
    limits: {...defaultLimits, ...limits},
  };
}

function isLoopback(host: string): boolean {
  return host === 'localhost' || host === '::1' || /^127(\.\d{1,3}){3}$/.test(host);
}

/** What counts is the address that the browser sees, not the one that is listened on. */
function isSecure({protocol, hostname}: URL): boolean {
  return protocol === 'https:' || isLoopback(hostname.replace(/^\[(.*)\]$/, '$1'));
}

function bracketed(host: string): string {
  return host.includes(':') ? `[${host}]` : host;
}

function whole(
  env: NodeJS.ProcessEnv,
  name: string,
  ifUnset: number,
  low: number,
  high: number,
): number {
  const text = env[name];
  if (text === undefined || text === '') return ifUnset;
  const value = Number(text);
  if (!Number.isInteger(value) || value < low || value > high) {
    throw new Error(`${name} is ${text}; expected a whole number from ${low} to ${high}`);
  }
  return value;
}
