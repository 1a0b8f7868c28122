import helmet, {type HelmetOptions} from 'helmet';
import type {IncomingMessage, ServerResponse} from 'node:http';

/** Names and values in turn. */
export type Headers = readonly string[];

type Directives = Record<string, string[]>;

const nothing: Directives = {'default-src': ["'none'"], 'frame-ancestors': ["'none'"]};

/** For answers that are data: nothing in them may be loaded or run. */
export function apiHeaders(isHttps: boolean): Headers {
  return headersOf(nothing, isHttps);
}

/** For the console; markup comes from Angular's own policies and nowhere else. */
export function consoleHeaders(isHttps: boolean, nonce: string): Headers {
  return headersOf(
    {
      'default-src': ["'none'"],
      'script-src': ["'self'"],
      'style-src': ["'self'", `'nonce-${nonce}'`],
      'img-src': ["'self'", 'data:', 'blob:'],
      'font-src': ["'self'"],
      'connect-src': ["'self'"],
      'object-src': ["'none'"],
      'base-uri': ["'none'"],
      'form-action': ["'self'"],
      'frame-ancestors': ["'none'"],
      'require-trusted-types-for': ["'script'"],
      'trusted-types': ['angular', 'angular#bundler', 'angular#unsafe-bypass', 'default'],
    },
    isHttps,
  );
}

/** For the reference page of the API and the pages that explain problems. */
export function documentHeaders(isHttps: boolean): Headers {
  return headersOf(
    {
      'default-src': ["'none'"],
      'script-src': ["'self'"],
      'style-src': ["'self'"],
      'img-src': ["'self'", 'data:'],
      'font-src': ["'self'"],
      'connect-src': ["'self'"],
      'base-uri': ["'none'"],
      'form-action': ["'none'"],
      'frame-ancestors': ["'none'"],
    },
    isHttps,
  );
}

/** What helmet would set, worked out once: running it on every request costs more than the ledger. */
function headersOf(directives: Directives, isHttps: boolean): Headers {
  const options: HelmetOptions = {
    // No upgrade-insecure-requests: it breaks plain HTTP where TLS is not ours.
    contentSecurityPolicy: {useDefaults: false, directives},
    strictTransportSecurity: isHttps && {maxAge: 31_536_000, includeSubDomains: true},
    referrerPolicy: {policy: 'no-referrer'},
    // For browsers of old, or said by the policy above: not worth their bytes on every answer.
    originAgentCluster: false,
    xDnsPrefetchControl: false,
    xDownloadOptions: false,
    xFrameOptions: false,
    xPermittedCrossDomainPolicies: false,
    xXssProtection: false,
  };
  const set: string[] = [];
  const response = {
    setHeader: (name: string, value: string) => {
      set.push(name, value);
    },
    removeHeader: () => undefined,
  };
  helmet(options)({} as IncomingMessage, response as unknown as ServerResponse, error => {
    if (error) throw error instanceof Error ? error : new Error('helmet failed');
  });
  return set;
}
