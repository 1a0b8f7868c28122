import {ServiceError} from '../errors.ts';

const QUOTE = 0x22;
const BACKSLASH = 0x5c;
const COLON = 0x3a;
const OPEN_BRACE = 0x7b;
const CLOSE_BRACE = 0x7d;
const OPEN_BRACKET = 0x5b;
const CLOSE_BRACKET = 0x5d;

const MAX_DEPTH = 8;

/** Members seen so far in one open object; null stands for an open array. */
type Level = Set<string> | null;

/**
 * Refuses nesting beyond `MAX_DEPTH` and members given twice, before `JSON.parse` sees the text.
 *
 * `JSON.parse` would spend a second on a million brackets and would keep the last of two members
 * in silence (RFC 8259 §4, RFC 7493 §2.3). Anything else that is wrong is left for it to name.
 *
 * @throws ServiceError nested-too-deep, duplicate-member
 */
export function scanJson(bytes: Uint8Array): void {
  const levels: Level[] = [];
  let text = -1; // where the last string began
  let textEnd = -1;
  const length = bytes.length;
  for (let i = 0; i < length; i++) {
    const byte = bytes[i];
    if (byte === QUOTE) {
      text = i + 1;
      i = endOfString(bytes, text);
      textEnd = i;
    } else if (byte === COLON) {
      const members = levels.at(-1);
      if (members && text >= 0) addMember(members, bytes, text, textEnd);
      text = -1;
    } else if (byte === OPEN_BRACE || byte === OPEN_BRACKET) {
      if (levels.length === MAX_DEPTH) {
        throw new ServiceError(
          'nested-too-deep',
          `The body is nested more than ${MAX_DEPTH} deep at byte ${i}.`,
        );
      }
      levels.push(byte === OPEN_BRACE ? new Set() : null);
    } else if (byte === CLOSE_BRACE || byte === CLOSE_BRACKET) {
      levels.pop();
    }
  }
}

/** The index of the closing quote of a string whose text begins at `start`. */
function endOfString(bytes: Uint8Array, start: number): number {
  let i = start;
  while (i < bytes.length && bytes[i] !== QUOTE) i += bytes[i] === BACKSLASH ? 2 : 1;
  return i;
}

function addMember(members: Set<string>, bytes: Uint8Array, start: number, end: number): void {
  const raw = Buffer.from(bytes.buffer, bytes.byteOffset + start, end - start).toString('utf8');
  const name = raw.includes('\\') ? unescape(raw) : raw;
  if (members.has(name)) {
    const shown = name.length > 64 ? `${name.slice(0, 64)}…` : name;
    throw new ServiceError(
      'duplicate-member',
      `The member ${JSON.stringify(shown)} is given twice in one object, the second time at byte ${start}.`,
    );
  }
  members.add(name);
}

function unescape(raw: string): string {
  try {
    return JSON.parse(`"${raw}"`) as string;
  } catch {
    return raw; // a bad escape: JSON.parse of the whole body names it
  }
}
