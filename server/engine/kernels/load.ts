import {existsSync, readFileSync} from 'node:fs';
import {fileURLToPath} from 'node:url';

import type {MultipoleExports} from '../multipole/kernels.ts';
import type {DirectExports} from './compiled-kernels.ts';

// The only file that touches WebAssembly.

/** Memory that all threads share: of the kernels, or plain where they can have none. */
export type KernelMemory = WebAssembly.Memory | {readonly buffer: SharedArrayBuffer};
export type KernelModule = WebAssembly.Module;
/** What the module exports; each family of kernels adds its own. */
export type KernelExports = DirectExports & MultipoleExports & {readonly version: () => number};

/** Raised, with `version` in assembly/direct.ts, whenever the kernels are called in another way. */
const VERSION = 5;
const PAGE = 65_536;
/** Below this a heap is of no use [bytes]. */
const SMALLEST = 2 ** 24;

/** [bytes] The first page belongs to the static data of the module and is never handed out. */
export const STATIC_BYTES = PAGE;

/** From the sources, and from dist/server/engine/kernels. */
const PLACES = ['../../../dist/engine/kernels.wasm', '../../../engine/kernels.wasm'];

/** The compiled kernels, or undefined where there are none or this machine has no SIMD. */
export function loadKernels(places: readonly string[] = PLACES): KernelModule | undefined {
  const file = places
    .map(place => fileURLToPath(new URL(place, import.meta.url)))
    .find(path => existsSync(path));
  if (!file) return undefined;
  try {
    return new WebAssembly.Module(readFileSync(file));
  } catch (error) {
    // An engine without SIMD or threads.
    if (error instanceof WebAssembly.CompileError) return undefined;
    throw error;
  }
}

/** The kernels of this thread; undefined where memory is plain, or they are of another build. */
export function instantiate(module: KernelModule, memory: KernelMemory): KernelExports | undefined {
  if (!(memory instanceof WebAssembly.Memory)) return undefined;
  // The module is ours: its exports are what the sources say.
  const exports = new WebAssembly.Instance(module, {env: {memory}}).exports as KernelExports;
  return exports.version() === VERSION ? exports : undefined;
}

/**
 * Memory that cannot grow, so views of it stay valid; pages cost nothing until they are written.
 * Where so much address space cannot be had, half of it is tried. V8 reserves several GiB around it;
 * where a limit on address space forbids that, the memory is plain and kernels do without.
 */
export function kernelMemory(bytes: number): KernelMemory {
  for (let size = bytes; size >= SMALLEST; size /= 2) {
    const pages = Math.ceil(size / PAGE);
    try {
      return new WebAssembly.Memory({initial: pages, maximum: pages, shared: true});
    } catch (error) {
      // Not to be had.
      if (!(error instanceof RangeError)) throw error;
    }
  }
  return plainMemory(bytes);
}

export const plainMemory = (bytes: number): KernelMemory => ({
  buffer: new SharedArrayBuffer(bytes),
});
