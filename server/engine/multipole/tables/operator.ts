import type {Dense} from './dense.ts';

/** Rows come in multiples of this, so that vectors of 2 or 4 numbers divide them. */
export const ROW_UNIT = 4;
/** As many rows as the kernel takes at once; what is left over comes in ROW_UNIT. */
export const ROW_BLOCK = 8;

export const padded = (count: number): number => Math.ceil(count / ROW_UNIT) * ROW_UNIT;

/** Numbers of one group in a table of groups. */
export const GROUP_STRIDE = 5;

/**
 * A matrix as the kernel multiplies by it: groups of rows, each of which takes one run of the input
 * and adds to one run of the output. `groups` holds, for each: rows, start and length of its input,
 * start of its output, and where its numbers begin in the data; these stand row block by row block,
 * and column by column within.
 */
export interface Operator {
  readonly groups: number[];
  /** The data, group by group. */
  readonly parts: Float64Array[];
}

export const emptyOperator = (): Operator => ({groups: [], parts: []});

export const dataLength = ({parts}: Operator): number =>
  parts.reduce((sum, part) => sum + part.length, 0);

/**
 * @param blocks side by side: what the run of the input is multiplied by
 * @param rows of the group; the blocks may have fewer, the rest is 0
 */
export function addGroup(
  operator: Operator,
  blocks: readonly Dense[],
  rows: number,
  inputStart: number,
  outputStart: number,
): void {
  const columns = blocks.reduce((sum, block) => sum + block.columns, 0);
  operator.groups.push(rows, inputStart, columns, outputStart, dataLength(operator));
  const data = new Float64Array(rows * columns);
  let at = 0;
  for (let row = 0; row < rows; row += ROW_BLOCK) {
    const own = Math.min(ROW_BLOCK, rows - row);
    for (const block of blocks) {
      const filled = Math.min(own, block.rows - row);
      for (let column = 0; column < block.columns; column++, at += own) {
        for (let i = 0; i < filled; i++) {
          data[at + i] = block.values[(row + i) * block.columns + column];
        }
      }
    }
  }
  operator.parts.push(data);
}
