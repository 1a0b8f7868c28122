import type {ProblemCode} from './api.ts';

export interface ProblemKind {
  readonly status: number;
  readonly title: string;
  /** What happened, for somebody who has only the code. */
  readonly meaning: string;
  /** What the caller can do about it. */
  readonly remedy: string;
}

const kind = (status: number, title: string, meaning: string, remedy: string): ProblemKind => ({
  status,
  title,
  meaning,
  remedy,
});

/** Every problem the service can answer with: the one table from code to status, title and advice. */
export const problemCatalogue: Readonly<Record<ProblemCode, ProblemKind>> = {
  // 400: the request could not be read.
  'malformed-json': kind(
    400,
    'The body is not JSON',
    'The body could not be read as JSON. NaN, Infinity, comments, trailing commas and single quotes are not JSON.',
    'Correct the body at the place that the detail names. Write missing numbers as null only where the contract allows it.',
  ),
  'invalid-utf8': kind(
    400,
    'The body is not UTF-8',
    'The body holds bytes that are not UTF-8, so no text in it could be trusted.',
    'Encode the body as UTF-8 without a byte order mark.',
  ),
  'duplicate-member': kind(
    400,
    'A member is given twice',
    'An object in the body names the same member twice, and readers differ in which one they keep.',
    'Give each member once.',
  ),
  'nested-too-deep': kind(
    400,
    'The body is nested too deeply',
    'Arrays and objects are nested more than 8 deep. No request of the contract needs that.',
    'Send the shape that the API reference shows.',
  ),
  'empty-body': kind(
    400,
    'The body is empty',
    'The operation needs a JSON body and none was sent.',
    'Send a JSON object as the body, with Content-Type application/json.',
  ),
  'bad-request': kind(
    400,
    'The request could not be read',
    'The request line or the headers do not follow HTTP, or no Host was given.',
    'Check the client or the proxy in front of it.',
  ),
  'malformed-authorization': kind(
    400,
    'The Authorization header could not be read',
    'The header is not of the form "Bearer" and one token, or it is given twice.',
    'Send exactly: Authorization: Bearer, one space, and the key.',
  ),
  'misplaced-credential': kind(
    400,
    'A key was sent in the wrong place',
    'A key in an address or a body ends up in logs and histories, so it is refused there even if it is right.',
    'Send the key in the Authorization header only. If the address was shared or logged, rotate the key.',
  ),
  'invalid-query': kind(
    400,
    'The query could not be read',
    'A query parameter is unknown, given twice, or not of the form that the contract asks for.',
    'Correct the parameter that the detail names.',
  ),
  'invalid-header': kind(
    400,
    'A header could not be read',
    'A request header is not of the form that the contract asks for.',
    'Correct the header that the detail names.',
  ),
  // 401, 403: who is calling, and what they may do.
  'key-required': kind(
    401,
    'A key is needed',
    'The operation is for callers with a key, and none was sent.',
    'Send Authorization: Bearer and a key. Owners of an account create keys in the console.',
  ),
  'invalid-key': kind(
    401,
    'The key is not valid',
    'The bearer token is not a key that is valid now. Unknown, mistyped, expired and revoked keys get this same answer.',
    'Check that the whole key was copied. Owners see the state of each key in the console and can rotate it.',
  ),
  'sign-in-required': kind(
    401,
    'Sign in first',
    'The console operation needs a session, and there is none or it has ended.',
    'Sign in and repeat the request.',
  ),
  'sign-in-failed': kind(
    401,
    'The sign-in did not succeed',
    'The e-mail address and the password do not belong together.',
    'Check both. After five failures in 15 minutes the next try has to wait.',
  ),
  'insufficient-scope': kind(
    403,
    'The key lacks a scope',
    'The key is valid, but it was not given the scope that the operation needs.',
    'Use a key with the scope that the detail names, or have an owner create one.',
  ),
  'insufficient-role': kind(
    403,
    'Your role does not allow this',
    'You are signed in, but the operation is for another role in the account.',
    'Ask an owner of the account.',
  ),
  'cross-site-request': kind(
    403,
    'The request did not come from the console',
    'A changing request of a session must carry the X-CSRF-Token that was given at sign-in, and come from the same origin.',
    'Reload the console and try again.',
  ),
  'insecure-origin': kind(
    403,
    'Sign-in needs a secure connection',
    'Session cookies are only sent over https or on the loopback address, and this address is neither.',
    'Open the console by https, or set PUBLIC_URL to the https address in front of the service.',
  ),
  // 404 … 415: the place, the method, the form.
  'not-found': kind(
    404,
    'There is nothing here',
    'The address is unknown, or what it names does not exist in your account.',
    'Compare the address with the API reference.',
  ),
  'method-not-allowed': kind(
    405,
    'The method does not fit the address',
    'The address exists, but not with this method. The Allow header lists the methods it has.',
    'Use a method from the Allow header.',
  ),
  'not-acceptable': kind(
    406,
    'The form asked for is not available',
    'The Accept header allows none of the forms in which the operation answers.',
    'Accept one of the media types that the detail lists.',
  ),
  'request-timeout': kind(
    408,
    'The request took too long to arrive',
    'The headers must arrive within 10 s and the whole request within 60 s.',
    'Send the request again over a steadier connection, or make it smaller.',
  ),
  'call-in-flight': kind(
    409,
    'The same call is being computed',
    'A call with this Idempotency-Key is still open.',
    'Wait for the seconds in Retry-After and repeat the call with the same key.',
  ),
  'key-state': kind(
    409,
    'The key is in the wrong state',
    'What was asked for is not possible in the present state of the key; a revoked or expired key can not be rotated.',
    'Create a new key instead.',
  ),
  'link-spent': kind(
    409,
    'The link can not be used',
    'A one-time link works once, within 24 hours.',
    'Have a new one made: npm run admin:create prints one, for a person who exists as well.',
  ),
  'body-too-large': kind(
    413,
    'The body is too large',
    'A JSON body may be 8 MiB at most, after decompression.',
    'Send fewer charges or targets a call, or describe targets as a grid or a path instead of a list.',
  ),
  'url-too-long': kind(
    414,
    'The address is too long',
    'An address may be 8 KiB at most.',
    'Move what is in the query to the body.',
  ),
  'unsupported-media-type': kind(
    415,
    'The media type is not supported',
    'The operation reads the media types that the Accept header of this answer lists.',
    'Send application/json with a matching Content-Type header.',
  ),
  'unsupported-encoding': kind(
    415,
    'The content encoding is not supported',
    'Bodies may be plain or compressed in the ways that the Accept-Encoding header of this answer lists.',
    'Send the body plain or in one of those encodings.',
  ),
  // 422: read, but breaks the schema or has no meaning.
  'wrong-type': kind(
    422,
    'A value has the wrong type',
    'A member is of another JSON type than the contract says; numbers are never written as text.',
    'Correct the member that the pointer names.',
  ),
  'missing-member': kind(
    422,
    'A member is missing',
    'An object lacks a member that the contract requires.',
    'Add the member that the detail names.',
  ),
  'unknown-member': kind(
    422,
    'A member is unknown',
    'An object has a member that the contract does not know. It is refused rather than ignored, since a misspelt option would change the result.',
    'Remove or correct the member that the pointer names.',
  ),
  'out-of-range': kind(
    422,
    'A value is out of range',
    'A number, a length or a count is outside of what the contract allows.',
    'Correct the member that the pointer names; the detail gives the range.',
  ),
  'invalid-value': kind(
    422,
    'A value is not allowed',
    'A text is not one of the values, or not of the form, that the contract allows.',
    'Correct the member that the pointer names.',
  ),
  'number-overflow': kind(
    422,
    'A number is too large',
    'A number is larger than double precision holds, either as given or once converted or computed.',
    'Check the magnitudes and the units of the request.',
  ),
  'unknown-unit': kind(
    422,
    'A unit is unknown',
    'Units come from closed lists, one for each quantity.',
    'Use a unit from the list in the detail.',
  ),
  'unequal-columns': kind(
    422,
    'Columns differ in length',
    'The columns x, y, z and charge describe the same rows, so they must be equally long.',
    'Send the same number of values in each column.',
  ),
  'duplicate-id': kind(
    422,
    'Two bodies have the same id',
    'Answers name bodies by their id, so each id may be given once.',
    'Rename one of the bodies.',
  ),
  'zero-length-axis': kind(
    422,
    'The axis has no direction',
    'A rotation needs an axis of some length; this one is zero.',
    'Give an axis, or leave the rotation out.',
  ),
  'not-a-rotation': kind(
    422,
    'The matrix is not a rigid placement',
    'The matrix scales, shears or mirrors, or its last row is not 0 0 0 1. Moving charges must not change their distances.',
    'Send a rotation and a translation only; apply scale to the coordinates and say the length unit instead.',
  ),
  'conflicting-members': kind(
    422,
    'Two members exclude each other',
    'The request says the same thing in two ways, and they need not agree.',
    'Keep one of the members that the detail names.',
  ),
  'zero-length-step': kind(
    422,
    'A step has no length',
    'A grid direction with more than one point needs a step of some length, and a path needs two different vertices.',
    'Correct the step, or set its count to 1.',
  ),
  'coincident-target': kind(
    422,
    'A target lies on a charge',
    'The potential and the field have no value there, and the request asked for coincident targets to be refused.',
    'Move the target, or set onCoincidence to mask or exclude.',
  ),
  'overlapping-charges': kind(
    422,
    'Two charges are at the same place',
    'A force or an energy between two point charges at zero distance has no value.',
    'Move one of them, or merge them into one charge.',
  ),
  'too-many-rows': kind(
    422,
    'There are too many rows',
    'A JSON request may hold 100,000 charges and listed targets in all, and a JSON answer 200,000 rows.',
    'Split the request; targets on a grid or a path are not counted as listed.',
  ),
  'too-large-for-synchronous': kind(
    422,
    'The computation is too large for a direct answer',
    'A call that answers at once may cost 2,000,000,000 pairs at most. Larger work belongs in a background job (Prefer: respond-async on the same operation, where the service offers jobs).',
    'Split the targets over several calls, or send the work as a job.',
  ),
  'tolerance-not-reached': kind(
    422,
    'The tolerance could not be reached',
    'The values are so small beside the terms they are sums of that the multipole method could not reach the tolerance, and a direct sum would be too large for one call. Nothing was charged.',
    'Ask for a larger tolerance, or split the targets so that each call can be summed directly.',
  ),
  'exceeds-limit': kind(
    422,
    'The call costs more than the whole limit',
    'The call costs more pairs than the key or the account may use in a whole month, so waiting would not help.',
    'Make the request smaller, or have an owner raise the limit of the key.',
  ),
  'idempotency-mismatch': kind(
    422,
    'The Idempotency-Key was used for another request',
    'Within 24 hours one key stands for one request, and this request differs from the first one.',
    'Use a new key for a new request.',
  ),
  // 429 … 503: not now.
  'rate-limited': kind(
    429,
    'Too many calls at once',
    'The calls of this key or address came faster than its burst allows.',
    'Wait for the seconds in Retry-After and repeat the call.',
  ),
  'allowance-exhausted': kind(
    429,
    'The month is used up',
    'What is left of the allowance of the account, or of the limit of the key, is less than the call costs.',
    'Wait for the first of next month (UTC), make the request smaller, or have an owner raise the limit.',
  ),
  'headers-too-large': kind(
    431,
    'The headers are too large',
    'The headers of a request may be 16 KiB in all.',
    'Send fewer or shorter headers; cookies are often the cause.',
  ),
  internal: kind(
    500,
    'Something failed on our side',
    'The service met a fault of its own. Nothing was charged.',
    'Try again; if it stays, give the request id to the operator.',
  ),
  overloaded: kind(
    503,
    'The service is at its limit',
    'The queue or the memory for computations is full. Nothing was charged.',
    'Wait for the seconds in Retry-After and repeat the call.',
  ),
  'time-out': kind(
    503,
    'The computation took too long',
    'A call that answers at once may compute for 30 s. Nothing was charged.',
    'Split the targets over several calls.',
  ),
  'not-ready': kind(
    503,
    'The service is not ready',
    'A part that the service needs is not working at the moment.',
    'Try again in a few seconds.',
  ),
};
