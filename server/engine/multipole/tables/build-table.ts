import {compress, forBlocks, type Basis, type Compression} from './compression.ts';
import {
  corner,
  dense,
  squareSum,
  submatrix,
  timesTransposed,
  transposed,
  type Dense,
} from './dense.ts';
import {byParity, harmonicCount} from './harmonics.ts';
import type {Level} from './levels.ts';
import {offsetClasses, reflectionsOf, signCount} from './offsets.ts';
import {addGroup, emptyOperator, padded, ROW_UNIT, type Operator} from './operator.ts';
import {childToParent, multipoleToLocal} from './translations.ts';

/**
 * All matrices of one level.
 *
 * Vectors stand in runs, one for each of the 8 parities, each padded to a multiple of 4. With the
 * reflections of the axes as R_s, the matrix of a source at an offset with signs s is R_s T R_s, so
 * the sum over all signs is, for targets of parity a,
 *
 *     y[a] = Σ_b T[a, b] w_(a xor b)[b]        w_g = Σ_s (−1)^(g·s) q_s
 *
 * and up to 8 sources cost one multiplication.
 */
export interface Table {
  readonly level: Level;
  /** Starts of the runs of multipoles and local expansions, and their end. */
  readonly harmonicStarts: readonly number[];
  /** The same of what is kept of multipoles and local expansions between far boxes. */
  readonly sourceStarts: readonly number[];
  readonly targetStarts: readonly number[];
  /** Multipoles → compressed, compressed → local expansion. */
  readonly compress: Operator;
  readonly expand: Operator;
  /** Children → parent and parent → children. */
  readonly up: SignedOperator;
  readonly down: Operator;
  readonly far: readonly FarOperator[];
}

/**
 * An operator on the w_g of up to 8 inputs. `moves` says, for each parity b, where its run begins in
 * an input, how long it is, and where it goes for each g (8 places, unused ones 0).
 */
export interface SignedOperator extends Operator {
  /** Axes whose sign matters, as bits. */
  readonly mask: number;
  readonly inputLength: number;
  readonly moves: number[];
}

export interface FarOperator extends SignedOperator {
  readonly offset: readonly number[];
}

export const MOVE_STRIDE = 10;

export function buildTable(level: Level): Table {
  const {degree, separation} = level;
  const n = harmonicCount(degree);
  const parities = byParity(degree);
  const harmonicStarts = starts(parities.map(own => padded(own.length)));
  const compression = compress(degree, separation);
  const far = farBlocks(level, parities, compression);
  const sizesOf = (side: 'rows' | 'columns'): number[] =>
    parities.map((_, parity) => Math.max(...far.map(each => each[side][parity])));
  const sourceStarts = starts(sizesOf('columns'));
  const targetStarts = starts(sizesOf('rows'));

  const compressor = emptyOperator();
  const expander = emptyOperator();
  parities.forEach((own, parity) => {
    const sourceSize = sourceStarts[parity + 1] - sourceStarts[parity];
    const targetSize = targetStarts[parity + 1] - targetStarts[parity];
    const {transform} = compression.sources[parity];
    const toCompressed = corner(transform, Math.min(sourceSize, own.length), own.length);
    const back = corner(compression.targets[parity].transform, own.length, targetSize);
    addGroup(compressor, [toCompressed], sourceSize, harmonicStarts[parity], sourceStarts[parity]);
    addGroup(expander, [back], padded(own.length), targetStarts[parity], harmonicStarts[parity]);
  });
  const upward = childToParent(degree, [0.25, 0.25, 0.25]);
  const upBlock = (a: number, b: number): Dense => {
    const block = submatrix(upward, n, parities[a], parities[b]);
    return corner(block, block.rows, padded(block.columns));
  };
  return {
    level,
    harmonicStarts,
    sourceStarts,
    targetStarts,
    compress: compressor,
    expand: expander,
    up: signedOperator(
      7,
      upBlock,
      parities.map(own => padded(own.length)),
      parities.map(own => padded(own.length)),
      harmonicStarts,
      harmonicStarts,
    ),
    down: downOperator(upBlock, parities, harmonicStarts),
    far: far.map(({offset, rows, columns, blocks}) => ({
      offset,
      ...signedOperator(
        reflectionsOf(offset),
        (a, b) => corner(blocks[8 * a + b] ?? dense(0, 0), rows[a], columns[b]),
        rows,
        columns,
        sourceStarts,
        targetStarts,
      ),
    })),
  };
}

const starts = (sizes: readonly number[]): number[] =>
  sizes.reduce<number[]>((all, size) => [...all, all[all.length - 1] + size], [0]);

function signedOperator(
  mask: number,
  block: (a: number, b: number) => Dense,
  rows: readonly number[],
  columns: readonly number[],
  inputStarts: readonly number[],
  outputStarts: readonly number[],
): SignedOperator {
  const operator = emptyOperator();
  const moves = columns.flatMap((count, b) => [inputStarts[b], count, 0, 0, 0, 0, 0, 0, 0, 0]);
  let start = 0;
  for (let a = 0; a < 8; a++) {
    const blocks: Dense[] = [];
    const from = start;
    for (let g = 0; g < signCount(mask); g++) {
      const b = a ^ spread(g, mask);
      moves[MOVE_STRIDE * b + 2 + g] = start;
      blocks.push(block(a, b));
      start += columns[b];
    }
    if (rows[a] > 0 && start > from) addGroup(operator, blocks, rows[a], from, outputStarts[a]);
  }
  return {...operator, mask, inputLength: start, moves};
}

/** The bits of `g` put where `mask` has ones. */
function spread(g: number, mask: number): number {
  let out = 0;
  for (let axis = 0, bit = 0; axis < 3; axis++) {
    if ((mask >> axis) & 1) out |= ((g >> bit++) & 1) << axis;
  }
  return out;
}

/** Gives u_g[a] = ½ X[b, a]ᵀ L[b], b = a xor g, one after the other; X from child to parent. */
function downOperator(
  upBlock: (a: number, b: number) => Dense,
  parities: readonly number[][],
  harmonicStarts: readonly number[],
): Operator {
  const operator = emptyOperator();
  for (let g = 0; g < 8; g++) {
    for (let a = 0; a < 8; a++) {
      const b = a ^ g;
      const block = transposed(upBlock(b, a));
      for (let i = 0; i < block.values.length; i++) block.values[i] /= 2;
      const start = g * harmonicStarts[8] + harmonicStarts[a];
      if (parities[a].length > 0 && parities[b].length > 0) {
        addGroup(operator, [block], padded(parities[a].length), harmonicStarts[b], start);
      }
    }
  }
  return operator;
}

interface FarBlocks {
  readonly offset: readonly number[];
  /** By 8 a + b; those that are 0 by symmetry are undefined. */
  readonly blocks: readonly (Dense | undefined)[];
  /** What of each parity is kept. */
  readonly rows: readonly number[];
  readonly columns: readonly number[];
}

/** The translations of all offsets, compressed, and how much of each the level needs. */
function farBlocks(
  {degree, separation, compression}: Level,
  parities: readonly number[][],
  {sources, targets, nearest}: Compression,
): FarBlocks[] {
  const n = harmonicCount(degree);
  // What no offset needs is not even computed.
  const tail = compression * Math.sqrt(nearest / 400 / n);
  const factorsOf = (side: readonly Basis[]): Dense[] =>
    side.map(({factor, sizes}) => transposed(corner(factor, factor.rows, countAbove(sizes, tail))));
  const left = factorsOf(targets);
  const right = factorsOf(sources);
  let total = 0;
  const all = offsetClasses(separation).map(offset => {
    const matrix = multipoleToLocal(degree, offset);
    const mask = reflectionsOf(offset);
    const blocks: (Dense | undefined)[] = Array.from({length: 64});
    forBlocks(mask, (a, b) => {
      const block = transposed(submatrix(matrix, n, parities[a], parities[b]));
      const compressed = timesTransposed(timesTransposed(left[a], block), right[b]);
      blocks[8 * a + b] = compressed;
      total += signCount(mask) * squareSum(compressed);
    });
    return {offset, mask, blocks};
  });
  const allowed = (compression ** 2 * total) / all.length;
  return all.map(({offset, mask, blocks}) => {
    const limit = sizeLimit(blocks, targets, sources, allowed / signCount(mask));
    const kept = (side: readonly Basis[]): number[] =>
      side.map(({sizes}) => ROW_UNIT * keptUnits(sizes, limit));
    return {offset, blocks, rows: kept(targets), columns: kept(sources)};
  });
}

const countAbove = (sizes: readonly number[], limit: number): number =>
  sizes.filter(size => size >= limit).length;

/** In whole row units, up or down: what that takes away is counted too. */
const keptUnits = (sizes: readonly number[], limit: number): number =>
  Math.round(countAbove(sizes, limit) / ROW_UNIT);

/** The largest limit on singular values below which no more than `allowed` is lost. */
function sizeLimit(
  blocks: readonly (Dense | undefined)[],
  targets: readonly Basis[],
  sources: readonly Basis[],
  allowed: number,
): number {
  const candidates = targets.flatMap(({sizes}) => sizes).sort((a, b) => a - b);
  const losses = blocks.map(block => block && lossesOf(block));
  const lost = (limit: number): number => {
    const rows = targets.map(({sizes}) => keptUnits(sizes, limit));
    const columns = sources.map(({sizes}) => keptUnits(sizes, limit));
    return losses.reduce(
      (sum, own, index) => sum + (own ? own(rows[index >> 3], columns[index & 7]) : 0),
      0,
    );
  };
  let low = 0;
  let high = candidates.length;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (lost(candidates[middle]) <= allowed) low = middle;
    else high = middle;
  }
  return candidates[low];
}

/** Σ of squares outside the first rows and columns, both in row units. */
function lossesOf({rows, columns, values}: Dense): (rows: number, columns: number) => number {
  const down = Math.ceil(rows / ROW_UNIT);
  const across = Math.ceil(columns / ROW_UNIT);
  // Sums of what is lost and not differences of what is kept, which would have no digits left.
  const right = new Float64Array((down + 1) * (across + 1));
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < columns; j++) {
      const unit = ((i / ROW_UNIT) | 0) * (across + 1) + ((j / ROW_UNIT) | 0);
      right[unit] += values[i * columns + j] ** 2;
    }
  }
  // Of unit row i: all from column j on.
  for (let i = 0; i < down; i++) {
    for (let j = across - 1; j >= 0; j--) {
      right[i * (across + 1) + j] += right[i * (across + 1) + j + 1];
    }
  }
  return (keptRows, keptColumns) => {
    let sum = 0;
    const from = Math.min(keptColumns, across);
    for (let i = 0; i < down; i++) sum += right[i * (across + 1) + (i < keptRows ? from : 0)];
    return sum;
  };
}
