import {
  findNodeAtLocation,
  parse,
  parseTree,
  printParseErrorCode,
  type Node,
  type ParseError,
} from 'jsonc-parser';

/** A part of the text, and what is wrong with it. */
export interface Fault {
  readonly from: number;
  readonly to: number;
  readonly message: string;
}

const WORDS: Readonly<Record<string, string>> = {
  InvalidSymbol: 'This is not a JSON value',
  InvalidNumberFormat: 'This is not a JSON number',
  PropertyNameExpected: 'The name of a member is missing',
  ValueExpected: 'A value is missing',
  ColonExpected: 'A colon is missing',
  CommaExpected: 'A comma is missing',
  CloseBraceExpected: 'A closing brace is missing',
  CloseBracketExpected: 'A closing bracket is missing',
  EndOfFileExpected: 'The request ends before this',
  InvalidCommentToken: 'JSON has no comments',
  UnexpectedEndOfString: 'The string does not end',
  UnexpectedEndOfNumber: 'The number does not end',
  InvalidUnicode: 'This is not a Unicode escape',
  InvalidEscapeCharacter: 'This is not an escape of JSON',
  InvalidCharacter: 'A control character must be escaped',
};

/** What keeps `text` from being JSON, at the first place; null if nothing does. */
export function syntaxFault(text: string): Fault | null {
  try {
    JSON.parse(text);
    return null;
  } catch {
    // Not JSON: the tolerant parser knows where, the built-in one is only faster.
  }
  const errors: ParseError[] = [];
  try {
    parse(text, errors, {disallowComments: true, allowTrailingComma: false});
  } catch {
    // Nested so deeply that the parser ran out of stack.
    return {from: 0, to: 1, message: 'The request is nested too deeply'};
  }
  const [first] = errors;
  if (!first) return {from: 0, to: text.length, message: 'This is not JSON'};
  const from = Math.min(first.offset, Math.max(0, text.length - 1));
  const to = Math.max(from + 1, first.offset + first.length);
  return {from, to, message: WORDS[printParseErrorCode(first.error)] ?? 'This is not JSON'};
}

const segmentsOf = (pointer: string): string[] =>
  pointer
    .split('/')
    .slice(1)
    .map(part => part.replaceAll('~1', '/').replaceAll('~0', '~'));

/** The node of a JSON pointer, or of its nearest ancestor that is there. */
function nodeAt(root: Node, pointer: string): Node {
  let node = root;
  for (const segment of segmentsOf(pointer)) {
    const next = findNodeAtLocation(node, [node.type === 'array' ? Number(segment) : segment]);
    if (!next) return node;
    node = next;
  }
  return node;
}

/** Where each pointer points: the member with its name, up to the end of its first line. */
export function placesOf(
  text: string,
  items: readonly {readonly pointer: string; readonly detail: string}[],
): (Fault | null)[] {
  let root: Node | undefined;
  try {
    root = items.length > 0 ? parseTree(text) : undefined;
  } catch {
    // Nested so deeply that the parser ran out of stack.
  }
  return items.map(({pointer, detail}) => {
    if (!root) return null;
    const node = nodeAt(root, pointer);
    const from = node.parent?.type === 'property' ? node.parent.offset : node.offset;
    const lineEnd = text.indexOf('\n', from);
    const to = Math.min(node.offset + node.length, lineEnd < 0 ? text.length : lineEnd);
    return {from, to: Math.max(to, from + 1), message: detail};
  });
}

/** The number of the line, from 1, that an offset lies on. */
export function lineOf(text: string, offset: number): number {
  let line = 1;
  for (let at = text.indexOf('\n'); at >= 0 && at < offset; at = text.indexOf('\n', at + 1)) line++;
  return line;
}
