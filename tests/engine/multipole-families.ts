import type {Charges, Points} from '../support/workshop.ts';
import {randomNumbers} from './random.ts';

/** Charges and targets of one shape. */
export interface Family {
  readonly name: string;
  readonly charges: Charges;
  readonly targets: Points;
}

type Place = readonly [x: number, y: number, z: number];

function pointsOf(places: readonly Place[]): Points {
  const [x, y, z] = [0, 1, 2].map(axis => Float64Array.from(places, place => place[axis]));
  return {x, y, z};
}

function chargesOf(places: readonly Place[], charge: (n: number) => number): Charges {
  return {...pointsOf(places), charge: Float64Array.from(places, (_, n) => charge(n))};
}

const some = <T>(count: number, make: (n: number) => T): T[] =>
  Array.from({length: count}, (_, n) => make(n));

/** The shapes that tell methods apart, each with `count` charges and targets, more or less. */
export function families(count: number): Family[] {
  const random = randomNumbers(20_262);
  const signed = (): number => (random() < 0.5 ? -1e-9 : 1e-9) * (0.5 + random());
  const inCube = (): Place => [random(), random(), random()];
  const onSphere = (): Place => {
    const z = 2 * random() - 1;
    const angle = 2 * Math.PI * random();
    const rho = Math.sqrt(1 - z * z);
    return [rho * Math.cos(angle), rho * Math.sin(angle), z];
  };
  const centres = some(20, inCube);
  const inCluster = (): Place => {
    const [x, y, z] = centres[Math.floor(20 * random())];
    const spread = (): number => 0.004 * (random() + random() + random() - 1.5);
    return [x + spread(), y + spread(), z + spread()];
  };
  const onPlane = (): Place => [random(), random(), 0.25];
  const onLine = (): Place => [random(), 0.5, 0.25];
  const many = (make: () => Place): Place[] => some(count, make);
  const random3 = (name: string, charges: () => Place, targets = charges): Family => ({
    name,
    charges: chargesOf(many(charges), signed),
    targets: pointsOf(many(targets)),
  });

  const side = Math.round(Math.cbrt(count));
  const lattice = some(side ** 3, (n): Place => [
    n % side,
    Math.floor(n / side) % side,
    Math.floor(n / side ** 2),
  ]);
  const between = lattice.map(([x, y, z]): Place => [x + 0.5, y + 0.5, z + 0.5]);
  // Every third one is no charge, so that not all targets on the lattice are masked.
  const onLattice = chargesOf(lattice, n => (n % 3 === 0 ? 0 : signed()));

  const cloud = many(inCube);
  const outlier: Place = [1e6, -2e5, 3e5];
  const pairs = some(Math.floor(count / 2), inCube);
  const gap = 1e-3 * Math.cbrt(1 / count);
  const tight = pairs.flatMap(([x, y, z], n): Place[] => {
    const [dx, dy, dz] = onSphere();
    return n < 0
      ? []
      : [
          [x, y, z],
          [x + gap * dx, y + gap * dy, z + gap * dz],
        ];
  });
  const one: Place = [0.3, 0.4, 0.5];

  return [
    random3('charges spread evenly', inCube),
    random3('20 clusters', inCluster),
    random3('the surface of a sphere', onSphere),
    random3('a plane', onPlane),
    random3('a line', onLine),
    random3('a line of charges in a cloud of targets', onLine, inCube),
    {
      name: 'a lattice, targets half a step off',
      charges: chargesOf(lattice, signed),
      targets: pointsOf(between),
    },
    {
      name: 'a lattice, targets on it and those on charges masked',
      charges: onLattice,
      targets: pointsOf(lattice),
    },
    {
      name: 'one charge a million sizes away',
      charges: chargesOf([...cloud.slice(1), outlier], signed),
      targets: pointsOf(many(inCube)),
    },
    {
      name: 'one target a million sizes away',
      charges: chargesOf(cloud, signed),
      targets: pointsOf([...many(inCube).slice(1), outlier]),
    },
    {
      name: 'all charges at one place',
      charges: chargesOf(
        cloud.map(() => one),
        signed,
      ),
      targets: pointsOf(many(inCube)),
    },
    {
      name: 'all charges at one place, and half of the targets',
      charges: chargesOf(
        cloud.map(() => one),
        signed,
      ),
      targets: pointsOf(some(count, n => (n % 2 ? one : inCube()))),
    },
    {
      name: 'one charge',
      charges: chargesOf([one], () => 1e-9),
      targets: pointsOf(many(inCube)),
    },
    {
      name: 'charges that are all zero',
      charges: chargesOf(cloud, () => 0),
      targets: pointsOf(many(inCube)),
    },
    {
      name: 'tight pairs of opposite charges',
      charges: chargesOf(tight, n => (n % 2 ? -1e-9 : 1e-9)),
      targets: pointsOf(many(inCube)),
    },
    {
      name: 'magnitudes over twelve orders',
      charges: chargesOf(cloud, () => signed() * 10 ** (-12 * random())),
      targets: pointsOf(many(inCube)),
    },
  ];
}
