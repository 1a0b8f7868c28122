interface TrustedTypesFactory {
  createPolicy(name: 'default', rules: {createHTML: (markup: string) => string | null}): unknown;
}

/**
 * The chart library empties its element by assigning an empty text as markup, which the page's policy
 * forbids like any other text. This lets the empty text through and nothing else.
 */
export function allowEmptyMarkup(): void {
  const factory = (globalThis as {trustedTypes?: TrustedTypesFactory}).trustedTypes;
  factory?.createPolicy('default', {createHTML: markup => (markup === '' ? markup : null)});
}
