import {compress, forBlocks, type Basis, type Compression} from './compression.ts';
import {
  corner,
  part,
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
import {Choice, fullStaircase, type Staircase} from './staircase.ts';
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
 * An operator on the w_g of up to 8 inputs. `moves` says how many chunks of ROW_UNIT numbers are
 * taken, and of each: its place in every input, and where its sum goes for each g.
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

export function buildTable(level: Level): Table {
  const {degree, separation} = level;
  const n = harmonicCount(degree);
  const parities = byParity(degree);
  const harmonicStarts = starts(parities.map(own => padded(own.length)));
  const compression = compress(degree, separation);
  const far = farBlocks(level, parities, compression);
  const {sourceSizes, targetSizes} = sizesOf(far);
  const sourceStarts = starts(sourceSizes);
  const targetStarts = starts(targetSizes);

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
      parities.map(own =>
        fullStaircase(
          padded(own.length),
          parities.map(other => padded(other.length)),
        ),
      ),
      harmonicStarts,
      harmonicStarts,
    ),
    down: downOperator(upBlock, parities, harmonicStarts),
    far: far.map(({offset, staircases, blocks}) => ({
      offset,
      ...signedOperator(
        reflectionsOf(offset),
        (a, b) => blocks[8 * a + b] ?? dense(0, 0),
        staircases,
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
  staircases: readonly Staircase[],
  inputStarts: readonly number[],
  outputStarts: readonly number[],
): SignedOperator {
  const operator = emptyOperator();
  const targets = new Map<number, number[]>();
  let start = 0;
  staircases.forEach(({chunks, steps}, a) => {
    const used = chunks.slice(0, Math.max(0, ...steps.map(({count}) => count)));
    used.forEach(({parity, start: column}, n) => {
      const place = inputStarts[parity] + column;
      const own = targets.get(place) ?? [];
      own[packed(a ^ parity, mask)] = start + ROW_UNIT * n;
      targets.set(place, own);
    });
    for (const {row, rows, count} of steps) {
      const tiles = used
        .slice(0, count)
        .map(({parity, start: column}) => part(block(a, parity), row, rows, column, ROW_UNIT));
      addGroup(operator, tiles, rows, start, outputStarts[a] + row);
    }
    start += ROW_UNIT * used.length;
  });
  // The last chunk of the input takes the sums that nobody needs.
  const moves = [...targets]
    .sort(([a], [b]) => a - b)
    .flatMap(([place, own]) => [
      place,
      ...Array.from({length: signCount(mask)}, (_, g) => own[g] ?? start),
    ]);
  return {...operator, mask, inputLength: start + ROW_UNIT, moves: [targets.size, ...moves]};
}

/** The bits of `bits` where `mask` has ones, side by side. */
function packed(bits: number, mask: number): number {
  let out = 0;
  for (let axis = 0, bit = 0; axis < 3; axis++) {
    if ((mask >> axis) & 1) out |= ((bits >> axis) & 1) << bit++;
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
  /** What is kept, by parity of the target. */
  readonly staircases: readonly Staircase[];
}

/** The translations of all offsets, compressed, and how much of each the level needs. */
function farBlocks(
  {degree, separation, compression, precision}: Level,
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
  const choices = all.map(({mask, blocks}) =>
    parities.map(
      (_, a) => new Choice(blocks.slice(8 * a, 8 * a + 8), signCount(mask), UNIT_COST[precision]),
    ),
  );
  const price = priceFor(choices.flat(), compression ** 2 * total);
  return all.map(({offset, blocks}, n) => ({
    offset,
    blocks,
    staircases: choices[n].map(choice => ({
      chunks: choice.chunks,
      steps: choice.steps(price).steps,
    })),
  }));
}

/** Cost of a number in a step of ROW_UNIT rows, relative to one in ROW_BLOCK rows. */
const UNIT_COST = {single: 1.3, double: 1};

/** The highest price of a multiplication at which no more than `allowed` is lost. */
function priceFor(choices: readonly Choice[], allowed: number): number {
  const isAllowed = (price: number): boolean => {
    let lost = 0;
    for (const choice of choices) lost += choice.steps(price).lost;
    return lost <= allowed;
  };
  let low = -80;
  let high = 0;
  // In powers of two of what is allowed, to a thousandth of one.
  for (let step = 0; step < 17; step++) {
    const middle = (low + high) / 2;
    if (isAllowed(allowed * 2 ** middle)) low = middle;
    else high = middle;
  }
  return allowed * 2 ** low;
}

/** What all far translations together take from a source and give to a target, by parity. */
function sizesOf(far: readonly FarBlocks[]): {sourceSizes: number[]; targetSizes: number[]} {
  const sourceSizes = new Array<number>(8).fill(0);
  const targetSizes = new Array<number>(8).fill(0);
  for (const {staircases} of far) {
    staircases.forEach(({chunks, steps}, a) => {
      for (const {row, rows, count} of steps) {
        targetSizes[a] = Math.max(targetSizes[a], row + rows);
        for (const {parity, start} of chunks.slice(0, count)) {
          sourceSizes[parity] = Math.max(sourceSizes[parity], start + ROW_UNIT);
        }
      }
    });
  }
  return {sourceSizes, targetSizes};
}

const countAbove = (sizes: readonly number[], limit: number): number =>
  sizes.filter(size => size >= limit).length;
