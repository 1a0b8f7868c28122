import {fixed, type WrittenNumber} from './numbers';

/** One prefix for a whole column of pairs, so that the unit stands in its head and points line up. */
export interface PairsScale {
  readonly letter: string;
  readonly write: (pairs: number) => WrittenNumber;
}

export function pairsScale(largest: number): PairsScale {
  const [size, letter] =
    largest >= 1e12
      ? [1e12, 'T']
      : largest >= 1e9
        ? [1e9, 'G']
        : largest >= 1e6
          ? [1e6, 'M']
          : [1, ''];
  const decimals = size === 1 ? 0 : largest / size < 10 ? 3 : 1;
  return {letter, write: pairs => fixed(pairs / size, decimals)};
}

/** The head of a column of pairs: "Spent, G". */
export const headOf = (word: string, {letter}: PairsScale): string =>
  letter === '' ? `${word}, pairs` : `${word}, ${letter}`;
