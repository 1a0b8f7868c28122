const inline = (value: unknown): string => {
  if (Array.isArray(value)) return `[${value.map(inline).join(', ')}]`;
  if (typeof value === 'object' && value !== null) {
    const members = Object.entries(value).map(
      ([name, member]) => `${JSON.stringify(name)}: ${inline(member)}`,
    );
    return `{${members.join(', ')}}`;
  }
  return JSON.stringify(value);
};

/** JSON as people write it: what fits on a line stays on it, and long columns run over several. */
export function compactJson(value: unknown, width = 46, indent = ''): string {
  const whole = inline(value);
  if (indent.length + whole.length <= width) return whole;
  const deeper = `${indent} `;
  if (Array.isArray(value)) {
    const isColumn = value.every(item => typeof item !== 'object');
    const parts = value.map(item => compactJson(item, width, deeper));
    return `[\n${deeper}${isColumn ? filled(parts, width, deeper) : parts.join(`,\n${deeper}`)}\n${indent}]`;
  }
  if (typeof value === 'object' && value !== null) {
    const members = Object.entries(value).map(
      ([name, member]) => `${JSON.stringify(name)}: ${compactJson(member, width, deeper)}`,
    );
    return `{\n${deeper}${members.join(`,\n${deeper}`)}\n${indent}}`;
  }
  return whole;
}

function filled(parts: readonly string[], width: number, indent: string): string {
  const lines: string[] = [];
  let line = '';
  for (const part of parts) {
    if (line !== '' && indent.length + line.length + part.length + 3 > width) {
      lines.push(`${line},`);
      line = '';
    }
    line += line === '' ? part : `, ${part}`;
  }
  return [...lines, line].join(`\n${indent}`);
}
