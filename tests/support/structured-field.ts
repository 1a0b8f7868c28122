/** One member of a List: a String and its parameters. */
export type Member = readonly [value: string, parameters: Readonly<Record<string, unknown>>];

const STRING = /^"((?:[\x20-\x21\x23-\x5b\x5d-\x7e]|\\["\\])*)"/;
const PARAMETER =
  /^; *([a-z*][a-z0-9_.*-]*)(?:=(?:(-?\d{1,15})(?![\d.])|"((?:[\x20-\x21\x23-\x5b\x5d-\x7e]|\\["\\])*)"))?/;

/**
 * Reads a List of Strings with parameters that are Integers, Strings or true (RFC 9651 §4.2), and
 * nothing else.
 *
 * @throws SyntaxError where the text is not one
 */
export function parseList(text: string): Member[] {
  const members: Member[] = [];
  let rest = text;
  const take = (pattern: RegExp): RegExpExecArray | null => {
    const match = pattern.exec(rest);
    if (match) rest = rest.slice(match[0].length);
    return match;
  };
  for (;;) {
    const value = take(STRING);
    if (!value) throw new SyntaxError(`expected a String at: ${rest}`);
    const parameters: Record<string, unknown> = {};
    for (let found = take(PARAMETER); found; found = take(PARAMETER)) {
      const [, name, integer, string] = found as unknown as (string | undefined)[];
      if (name === undefined || name in parameters)
        throw new SyntaxError(`${name ?? ''} is given twice`);
      parameters[name] = integer === undefined ? (string ?? true) : Number(integer);
    }
    members.push([value[1], parameters]);
    if (rest === '') return members;
    if (!take(/^[ \t]*,[ \t]*/)) throw new SyntaxError(`expected a comma at: ${rest}`);
  }
}
