export type Vector = readonly [number, number, number];

export const dot = (a: Vector, b: Vector): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const length = (a: Vector): number => Math.hypot(a[0], a[1], a[2]);
export const times = (a: Vector, factor: number): Vector => [
  a[0] * factor,
  a[1] * factor,
  a[2] * factor,
];
export const plus = (a: Vector, b: Vector): Vector => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const minus = (a: Vector, b: Vector): Vector => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const cross = (a: Vector, b: Vector): Vector => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/** The letter of the axis that `direction` runs along, or null for an oblique one. */
export function axisOf(direction: Vector): 'x' | 'y' | 'z' | null {
  const size = length(direction);
  const index = direction.findIndex(part => Math.abs(part) >= size * (1 - 1e-9));
  return index < 0 || size === 0 ? null : (['x', 'y', 'z'] as const)[index];
}
