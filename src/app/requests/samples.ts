import type {
  Body,
  FieldRequest,
  ForceRequest,
  MomentRequest,
  Operation,
  Units,
} from '../../../shared/api';
import {compactJson} from './compact-json';
import {dropletCloud} from './droplet-cloud';
import {sprayAbovePanel} from './spray-above-panel';

/** A request to begin with. All of them belong to one invented coating booth. */
export interface Sample {
  readonly operation: Operation;
  readonly name: string;
  readonly about: string;
  /** Made when it is chosen: a cloud of droplets is not kept ready. */
  readonly text: () => string;
}

const DROPLETS = 12_000;
const SEED = 20_261_201;

const units: Units = {length: 'mm', charge: 'nC', potential: 'kV', field: 'kV/m'};

/** The charge on the rim of a bell cup of 34 mm radius, as 24 equal charges. */
function bell(height: number): Body {
  const angles = Array.from({length: 24}, (_, k) => (k * Math.PI) / 12);
  const rounded = (value: number): number => Number(value.toFixed(3)) + 0;
  return {
    id: 'bell',
    charges: {
      x: angles.map(angle => rounded(34 * Math.cos(angle))),
      y: angles.map(angle => rounded(34 * Math.sin(angle))),
      z: angles.map(() => 0),
      charge: angles.map(() => -1.25),
    },
    placement: {translate: [0, 0, height]},
  };
}

const bracket: Body = {
  id: 'bracket',
  charges: {x: [0, 0], y: [0, 0], z: [-4, 4], charge: [9, 4]},
  placement: {translate: [52, 0, 30], rotate: {axis: [0, 1, 0], degrees: 30}},
};

const needle: Body = {id: 'needle', charges: {x: [0], y: [0], z: [70], charge: [-6.5]}};

const section: FieldRequest = {
  units,
  bodies: [bell(58), bracket],
  targets: {
    grid: {
      origin: [-80, 0, 0],
      steps: [
        [0.5, 0, 0],
        [0, 0, 0.5],
        [0, 0, 0],
      ],
      counts: [321, 201, 1],
    },
  },
  quantities: ['potential', 'field'],
};

const cloud = (): FieldRequest => ({
  units: {length: 'mm', charge: 'pC', potential: 'V', field: 'kV/m'},
  bodies: [{id: 'droplets', charges: dropletCloud(DROPLETS, SEED)}],
  targets: {
    grid: {
      origin: [-70, 0, 0],
      steps: [
        [1, 0, 0],
        [0, 0, 1],
        [0, 0, 0],
      ],
      counts: [141, 71, 1],
    },
  },
  quantities: ['potential', 'field'],
});

const spray = (): FieldRequest => ({
  units: {length: 'mm', charge: 'pC', potential: 'kV', field: 'kV/m'},
  accuracy: {tolerance: 1e-4},
  targets: {
    grid: {
      origin: [-150, 0, 2],
      steps: [
        [1, 0, 0],
        [0, 0, 1],
        [0, 0, 0],
      ],
      counts: [301, 129, 1],
    },
  },
  quantities: ['potential', 'field'],
  // Last, so that what can be changed by hand comes first.
  bodies: sprayAbovePanel(SEED),
});

const path: FieldRequest = {
  units,
  bodies: [bell(58), needle, bracket],
  targets: {
    path: {
      vertices: [
        [-34, 0, 52],
        [0, 0, 20],
        [46, 0, 14],
      ],
      samples: 401,
    },
  },
  quantities: ['potential', 'field', 'magnitude'],
  accuracy: {bounds: true},
};

const forces: ForceRequest = {
  units: {length: 'mm', charge: 'nC', force: 'µN', torque: 'µN·m', energy: 'µJ'},
  bodies: [bell(58), needle, bracket],
  accuracy: {bounds: true},
};

const moments: MomentRequest = {
  units: {length: 'mm', charge: 'nC'},
  bodies: [bell(58), bracket],
  about: [0, 0, 58],
};

export const samples: readonly Sample[] = [
  {
    operation: 'fields',
    name: 'Bell cup and bracket',
    about: 'Two bodies on a section of 321 by 201 points',
    text: () => compactJson(section),
  },
  {
    operation: 'fields',
    name: 'Cloud of 12 000 droplets',
    about: `Charged spray under the bell, seed ${SEED}`,
    text: () => compactJson(cloud()),
  },
  {
    operation: 'fields',
    name: 'Spray of 50 000 charges above a panel',
    about: 'A cloud and an earthed panel, to a tolerance of 1e-4',
    text: () => compactJson(spray()),
  },
  {
    operation: 'fields',
    name: 'From the rim to the bracket',
    about: 'Potential and field along a path, with bounds',
    text: () => compactJson(path),
  },
  {
    operation: 'forces',
    name: 'Forces in the booth',
    about: 'Bell, needle and bracket on each other',
    text: () => compactJson(forces),
  },
  {
    operation: 'moments',
    name: 'Moments of bell and bracket',
    about: 'Charge, centre, dipole and quadrupole',
    text: () => compactJson(moments),
  },
];
