/** What of WebAssembly `load.ts` uses; the types of Node leave it out, and there is no browser here. */
declare namespace WebAssembly {
  class Memory {
    constructor(descriptor: {initial: number; maximum: number; shared: boolean});
    readonly buffer: SharedArrayBuffer;
  }
  class Module {
    constructor(bytes: Uint8Array);
  }
  class Instance {
    constructor(module: Module, imports: {env: {memory: Memory}});
    readonly exports: unknown;
  }
  class CompileError extends Error {}
}
