import {HttpErrorResponse} from '@angular/common/http';

export interface ProblemItem {
  readonly pointer: string;
  readonly code: string;
  readonly detail: string;
}

/** What went wrong, as the service says it or, where it could not answer, as the console sees it. */
export interface Problem {
  readonly status: number;
  readonly code: string;
  readonly title: string;
  readonly detail: string;
  /** The address that explains the code; null where the service did not answer. */
  readonly type: string | null;
  readonly requestId: string | null;
  readonly errors: readonly ProblemItem[];
  readonly errorCount: number;
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value);

const text = (value: unknown, otherwise: string): string =>
  typeof value === 'string' && value !== '' ? value : otherwise;

const item = (value: unknown): ProblemItem[] =>
  isRecord(value)
    ? [
        {
          pointer: text(value['pointer'], ''),
          code: text(value['code'], ''),
          detail: text(value['detail'], ''),
        },
      ]
    : [];

/** HttpClient hands over the body as text where it was not asked for JSON. */
function documentOf(body: unknown): Record<string, unknown> {
  if (isRecord(body)) return body;
  if (typeof body !== 'string') return {};
  try {
    const parsed: unknown = JSON.parse(body);
    return isRecord(parsed) ? parsed : {};
  } catch {
    // Not a problem document: a proxy's own page, for instance.
    return {};
  }
}

export function problemOf(error: unknown): Problem {
  if (!(error instanceof HttpErrorResponse)) {
    return local('console-failed', 'The console failed', String(error));
  }
  if (error.status === 0) {
    return local(
      'no-answer',
      'The service did not answer',
      'Check the connection, then try again.',
    );
  }
  const body = documentOf(error.error);
  const errors = Array.isArray(body['errors']) ? body['errors'].flatMap(item) : [];
  return {
    status: error.status,
    code: text(body['code'], `http-${error.status}`),
    title: text(body['title'], `The service answered ${error.status}`),
    detail: text(body['detail'], ''),
    type: text(body['type'], '') || null,
    requestId: error.headers.get('X-Request-Id'),
    errors,
    errorCount: typeof body['errorCount'] === 'number' ? body['errorCount'] : errors.length,
  };
}

function local(code: string, title: string, detail: string): Problem {
  return {status: 0, code, title, detail, type: null, requestId: null, errors: [], errorCount: 0};
}
