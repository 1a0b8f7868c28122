import type {Charges, Points} from '../tests/support/workshop.ts';

/** The same numbers in every run: a linear congruential generator (Numerical Recipes, §7.1). */
export function generator(seed: number): () => number {
  let state = seed;
  return () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
}

type Random = () => number;
export type Shape = (random: Random) => () => readonly [number, number, number];

export const cube: Shape = random => () => [random(), random(), random()];

/** 20 clusters, each denser towards its middle. */
export const clusters: Shape = random => {
  const centres = Array.from({length: 20}, () => [random(), random(), random()]);
  const spread = (): number => 0.02 * (random() + random() + random() - 1.5);
  return () => {
    const [x, y, z] = centres[Math.floor(random() * centres.length)];
    return [x + spread(), y + spread(), z + spread()];
  };
};

/** Evenly on a sphere: Archimedes' hat-box theorem. */
export const sphere: Shape = random => () => {
  const z = 2 * random() - 1;
  const angle = 2 * Math.PI * random();
  const ring = Math.sqrt(1 - z * z);
  return [ring * Math.cos(angle), ring * Math.sin(angle), z];
};

export function points(count: number, shape: () => readonly [number, number, number]): Points {
  const x = new Float64Array(count);
  const y = new Float64Array(count);
  const z = new Float64Array(count);
  for (let i = 0; i < count; i++) [x[i], y[i], z[i]] = shape();
  return {x, y, z};
}

/** Charges of 1 C and −1 C at random. */
export function withCharges(places: Points, random: Random): Charges {
  return {...places, charge: places.x.map(() => (random() < 0.5 ? 1 : -1))};
}
