/** Hands a file to the browser's own download. */
export function download(
  name: string,
  content: Blob | string,
  type = 'text/csv;charset=utf-8',
): void {
  const blob = typeof content === 'string' ? new Blob([content], {type}) : content;
  const address = URL.createObjectURL(blob);
  const link = document.createElement('a');
  link.href = address;
  link.download = name;
  link.click();
  // The browser has read the address by then.
  setTimeout(() => URL.revokeObjectURL(address), 10_000);
}
