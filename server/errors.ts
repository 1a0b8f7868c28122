import type {ProblemCode} from '../shared/api.ts';

/** One fault of a request, at the place that `pointer` (RFC 6901) names. */
export interface Issue {
  readonly pointer: string;
  readonly code: ProblemCode;
  readonly detail: string;
}

export interface ServiceErrorOptions {
  /** The first faults, 20 at most. */
  readonly errors?: readonly Issue[];
  /** How many faults there are in all; the number of `errors` if not given. */
  readonly errorCount?: number;
  /** Seconds after which the same call may succeed. */
  readonly retryAfter?: number;
  /** Facts for the problem writer, such as the scope that was lacking. */
  readonly facts?: Readonly<Record<string, string>>;
}

/** A failure that the caller is told about. It knows nothing of HTTP. */
export class ServiceError extends Error {
  readonly code: ProblemCode;
  readonly errors: readonly Issue[];
  readonly errorCount: number;
  readonly retryAfter: number | undefined;
  readonly facts: Readonly<Record<string, string>>;

  constructor(code: ProblemCode, message: string, options: ServiceErrorOptions = {}) {
    super(message);
    this.name = 'ServiceError';
    this.code = code;
    this.errors = options.errors ?? [];
    this.errorCount = options.errorCount ?? this.errors.length;
    this.retryAfter = options.retryAfter;
    this.facts = options.facts ?? {};
  }
}
