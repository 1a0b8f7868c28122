/** JSON as people write it: what fits on a line stays on it, and long columns run over several. */
export function compactJson(value: unknown, width = 46, indent = ''): string {
  const whole = onOneLine(value, width - indent.length);
  if (whole !== null) return whole;
  const deeper = `${indent} `;
  if (Array.isArray(value)) {
    const isColumn = value.every(item => typeof item !== 'object');
    const items = isColumn
      ? filled(value, width, deeper)
      : value.map(item => compactJson(item, width, deeper)).join(`,\n${deeper}`);
    return `[\n${deeper}${items}\n${indent}]`;
  }
  if (typeof value === 'object' && value !== null) {
    const members = Object.entries(value).map(
      ([name, member]) => `${JSON.stringify(name)}: ${compactJson(member, width, deeper)}`,
    );
    return `{\n${deeper}${members.join(`,\n${deeper}`)}\n${indent}}`;
  }
  return JSON.stringify(value);
}

/** `value` on one line; null as soon as that takes more than `room`, so that long columns are not written twice. */
function onOneLine(value: unknown, room: number): string | null {
  if (typeof value !== 'object' || value === null) {
    const text = JSON.stringify(value);
    return text.length <= room ? text : null;
  }
  const isArray = Array.isArray(value);
  const [open, close] = isArray ? '[]' : '{}';
  let line = open;
  const entries = isArray ? value.entries() : Object.entries(value);
  for (const [name, member] of entries) {
    if (line !== open) line += ', ';
    if (!isArray) line += `${JSON.stringify(name)}: `;
    const text = onOneLine(member, room - line.length - close.length);
    if (text === null) return null;
    line += text;
  }
  line += close;
  return line.length <= room ? line : null;
}

function filled(items: readonly unknown[], width: number, indent: string): string {
  const lines: string[] = [];
  let line = '';
  for (const part of isNumbers(items) ? written(items) : items.map(item => JSON.stringify(item))) {
    if (line !== '' && indent.length + line.length + part.length + 3 > width) {
      lines.push(`${line},`);
      line = '';
    }
    line += line === '' ? part : `, ${part}`;
  }
  return [...lines, line].join(`\n${indent}`);
}

const isNumbers = (items: readonly unknown[]): items is readonly number[] =>
  items.every(item => Number.isFinite(item));

/** All at once, which takes half as long as one after the other. */
const written = (numbers: readonly number[]): string[] =>
  JSON.stringify(numbers).slice(1, -1).split(',');
