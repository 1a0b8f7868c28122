import type {Arena} from './arena.ts';
import type {TargetTree} from './interactions.ts';
import type {SourceTree} from './source-tree.ts';

// Writes what kernels/assembly/multipole-structs.ts reads, in the same order.

export function writeWords(arena: Arena, words: readonly number[]): number {
  return arena.keep(words).byteOffset;
}

/** Without expansions: `setExpansions` says where they lie once there are any. */
export function writeSources(arena: Arena, tree: SourceTree): number {
  const {charges, boxes, ranges, children, octants} = tree;
  const columns = [charges, boxes, ranges, children, octants];
  const words = arena.integers(EXPANSIONS + 3);
  const scale = new Float64Array(arena.buffer, words.byteOffset, 1);
  scale[0] = tree.chargeScale;
  words.set(
    columns.map(({byteOffset}) => byteOffset),
    2,
  );
  return words.byteOffset;
}

/** Place of the addresses of expansions in the struct of sources. */
const EXPANSIONS = 7;

/** Addresses of what far boxes take of a tree of sources, and of an expansion of zeros. */
export interface SourceExpansions {
  readonly compressed: number;
  readonly zeros: number;
}

export function setExpansions(
  arena: Arena,
  sourcesAddress: number,
  multipoles: number,
  {compressed, zeros}: SourceExpansions,
): void {
  const words = new Int32Array(arena.buffer, sourcesAddress, EXPANSIONS + 3);
  words.set([multipoles, compressed, zeros], EXPANSIONS);
}

/** Where values at sorted targets are added to; the field is absent where it is not wanted. */
export interface TargetValues {
  readonly v: Float64Array;
  readonly e: readonly Float64Array[];
  readonly flags: Uint8Array;
}

export function writeTargets(
  arena: Arena,
  tree: TargetTree,
  {v, e, flags}: TargetValues,
  locals: number,
): number {
  const {x, y, z, boxes, ranges, children, octants} = tree;
  const {farStarts, farEntries, nearStarts, nearEntries, parents} = tree;
  const field = e.length === 0 ? [0, 0, 0] : e.map(({byteOffset}) => byteOffset);
  const addresses = (...arrays: readonly {readonly byteOffset: number}[]): number[] =>
    arrays.map(({byteOffset}) => byteOffset);
  return writeWords(arena, [
    ...addresses(x, y, z, v),
    ...field,
    ...addresses(boxes, ranges, children, octants),
    locals,
    ...addresses(farStarts, farEntries, nearStarts, nearEntries, flags, parents),
  ]);
}

/** Place of `locals` in the struct of targets. */
const LOCALS = 11;

/** Says where the local expansions of a tree of targets lie, once there are any. */
export function setLocals(arena: Arena, targetsAddress: number, locals: number): void {
  new Int32Array(arena.buffer, targetsAddress, LOCALS + 1)[LOCALS] = locals;
}
