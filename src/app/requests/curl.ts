/** Above this many characters the body goes into a file of its own. */
const INLINE = 4000;

/** The same call for a shell, with the key left to the environment. */
export function curl(origin: string, path: string, body: string): string {
  const head = [
    `curl ${origin}${path} \\`,
    '  -H "Authorization: Bearer $FIELDSTEAD_KEY" \\',
    "  -H 'Content-Type: application/json' \\",
  ];
  const data =
    body.length > INLINE
      ? '  --data-binary @request.json'
      : `  --data-binary '${body.replaceAll("'", "'\\''")}'`;
  return [...head, data].join('\n');
}
