/** What `load.ts` expects: raised whenever the kernels are called in another way. */
export function version(): i32 {
  return 1;
}
