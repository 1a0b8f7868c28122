/** "IH" for Ines Halloran. */
export function initials(name: string): string {
  const words = name.split(/\s+/).filter(word => word !== '');
  return (
    (words[0]?.[0] ?? '') + (words.length > 1 ? words[words.length - 1][0] : '')
  ).toUpperCase();
}
