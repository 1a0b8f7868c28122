import type {Operation, ProblemCode} from '../../shared/api.ts';

const charges = {x: [0, 1], y: [0, 0], z: [0, 0], charge: [1e-9, -1e-9]};
const targets = {points: {x: [2], y: [0], z: [0]}};
const valid = {bodies: [{charges}], targets};
export const withCharges = (more: object) => ({
  bodies: [{charges: {...charges, ...more}}],
  targets,
});
const withPlacement = (placement: object) => ({bodies: [{charges, placement}], targets});
/** A body that is valid, as it is sent. */
export const text = JSON.stringify(valid);
const steps = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];
const shear = [1, 0.1, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1];
const mirror = [-1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1];

export interface BadBody {
  readonly what: string;
  readonly body: unknown;
  readonly code: ProblemCode;
  /** Where the fault lies, if it lies at a place. */
  readonly pointer?: string;
  readonly operation?: Operation | 'estimates';
}

export const unreadable: readonly BadBody[] = [
  {what: 'nothing', body: '', code: 'empty-body'},
  {what: 'white space', body: ' \n', code: 'malformed-json'},
  {what: 'half a body', body: text.slice(0, -1), code: 'malformed-json'},
  {what: 'NaN as a bare word', body: text.replace('1e-9', 'NaN'), code: 'malformed-json'},
  {what: 'Infinity as a bare word', body: text.replace('1e-9', 'Infinity'), code: 'malformed-json'},
  {what: 'a comma too many', body: text.replace(']', ',]'), code: 'malformed-json'},
  {what: 'a member twice', body: text.replace('{', '{"targets":{},'), code: 'duplicate-member'},
  {
    what: 'a member twice, once with an escape',
    body: text.replace('{', '{"target\\u0073":{},'),
    code: 'duplicate-member',
  },
  {what: 'a million brackets', body: '['.repeat(1e6), code: 'nested-too-deep'},
  {what: 'nine open objects', body: '{"a":'.repeat(9), code: 'nested-too-deep'},
];

export const meaningless: readonly BadBody[] = [
  {what: 'a list', body: [], code: 'wrong-type', pointer: ''},
  {what: 'null', body: 'null', code: 'wrong-type', pointer: ''},
  {what: 'no bodies', body: {targets}, code: 'missing-member', pointer: ''},
  {
    what: 'a number as text',
    body: withCharges({x: [0, '1']}),
    code: 'wrong-type',
    pointer: '/bodies/0/charges/x/1',
  },
  {
    what: 'NaN as text',
    body: withCharges({x: ['NaN', 1]}),
    code: 'wrong-type',
    pointer: '/bodies/0/charges/x/0',
  },
  {
    what: 'Infinity as text',
    body: withCharges({charge: [1, 'Infinity']}),
    code: 'wrong-type',
    pointer: '/bodies/0/charges/charge/1',
  },
  {
    what: 'null in a column',
    body: withCharges({z: [0, null]}),
    code: 'wrong-type',
    pointer: '/bodies/0/charges/z/1',
  },
  {
    what: 'unequal columns',
    body: withCharges({y: [0]}),
    code: 'unequal-columns',
    pointer: '/bodies/0/charges/y',
  },
  {
    what: '1e999',
    body: text.replace('-1e-9', '1e999'),
    code: 'number-overflow',
    pointer: '/bodies/0/charges/charge/1',
  },
  {
    what: '-1e999',
    body: text.replace('-1e-9', '-1e999'),
    code: 'number-overflow',
    pointer: '/bodies/0/charges/charge/1',
  },
  {
    what: 'an unknown unit',
    body: {...valid, units: {length: 'furlong'}},
    code: 'unknown-unit',
    pointer: '/units/length',
  },
  {
    what: 'a formula as a unit',
    body: {...valid, units: {length: '1:999999999999'}},
    code: 'unknown-unit',
    pointer: '/units/length',
  },
  {what: 'an unknown member', body: {...valid, role: 1}, code: 'unknown-member', pointer: '/role'},
  {
    what: 'an unknown member with a slash in its name',
    body: {...valid, 'a/b~c': 1},
    code: 'unknown-member',
    pointer: '/a~1b~0c',
  },
  {
    what: '__proto__',
    body: text.replace('{', '{"__proto__":{"targets":1},'),
    code: 'unknown-member',
    pointer: '/__proto__',
  },
  {
    what: 'constructor',
    body: text.replace('{"x"', '{"constructor":{"prototype":{}},"x"'),
    code: 'unknown-member',
    pointer: '/bodies/0/charges/constructor',
  },
  {
    what: 'a zero-length axis',
    body: withPlacement({rotate: {axis: [0, 0, 0], degrees: 30}}),
    code: 'zero-length-axis',
    pointer: '/bodies/0/placement/rotate/axis',
  },
  {
    what: 'a matrix with shear',
    body: withPlacement({matrix: shear}),
    code: 'not-a-rotation',
    pointer: '/bodies/0/placement/matrix',
  },
  {
    what: 'a matrix that mirrors',
    body: withPlacement({matrix: mirror}),
    code: 'not-a-rotation',
    pointer: '/bodies/0/placement/matrix',
  },
  {
    what: 'a matrix and a translation',
    body: withPlacement({matrix: shear, translate: [0, 0, 0]}),
    code: 'conflicting-members',
    pointer: '/bodies/0/placement',
  },
  {
    what: 'points and a path',
    body: {...valid, targets: {...targets, path: {vertices: [[0, 0, 0]], samples: 2}}},
    code: 'conflicting-members',
    pointer: '/targets',
  },
  {
    what: 'two bodies of one name',
    body: {
      bodies: [
        {id: 'a', charges},
        {id: 'a', charges},
      ],
      targets,
    },
    code: 'duplicate-id',
    pointer: '/bodies/1/id',
  },
  {
    what: 'a column without values',
    body: withCharges({x: []}),
    code: 'out-of-range',
    pointer: '/bodies/0/charges/x',
  },
  {
    what: 'a permittivity below one',
    body: {...valid, medium: {relativePermittivity: 0.5}},
    code: 'out-of-range',
    pointer: '/medium/relativePermittivity',
  },
  {
    what: 'a step of no length',
    body: {
      ...valid,
      targets: {
        grid: {
          origin: [0, 0, 0],
          steps: [[0, 0, 0], ...steps.slice(1)],
          counts: [2, 1, 1],
        },
      },
    },
    code: 'zero-length-step',
    pointer: '/targets/grid/steps/0',
  },
  {
    what: 'a wrong member inside an estimate',
    body: {operation: 'potentials', request: withCharges({x: [0, '1']})},
    code: 'wrong-type',
    pointer: '/request/bodies/0/charges/x/1',
    operation: 'estimates',
  },
  {
    what: 'unequal columns inside an estimate',
    body: {operation: 'potentials', request: withCharges({x: [0]})},
    code: 'unequal-columns',
    pointer: '/request/bodies/0/charges/y',
    operation: 'estimates',
  },
  {
    what: 'a target on a charge that is to be refused',
    body: {...valid, targets: {points: {x: [1], y: [0], z: [0]}}, onCoincidence: 'reject'},
    code: 'coincident-target',
    pointer: '/targets/points/x/0',
  },
];

export const tooMuch: readonly BadBody[] = [
  {
    what: 'more pairs than one call computes',
    body: {
      bodies: [{charges: columns(12_000, true)}],
      targets: {
        grid: {
          origin: [0, 0, 9],
          steps,
          counts: [500, 400, 1],
        },
      },
    },
    code: 'too-large-for-synchronous',
  },
  {
    what: 'more rows than one request has',
    body: {bodies: [{charges: columns(60_000, true)}], targets: {points: columns(60_000, false)}},
    code: 'too-many-rows',
  },
  {
    what: 'more rows than one answer has',
    body: {
      ...valid,
      targets: {
        path: {
          vertices: [
            [0, 0, 1],
            [1, 0, 1],
          ],
          samples: 200_001,
        },
      },
    },
    code: 'too-large-for-synchronous',
  },
  {what: 'nine MiB', body: text + ' '.repeat(9 * 1024 * 1024), code: 'body-too-large'},
];

function columns(count: number, hasCharge: boolean): object {
  const zeros = new Array<number>(count).fill(0);
  const column = {x: zeros.map((_zero, index) => index), y: zeros, z: zeros};
  return hasCharge ? {...column, charge: zeros.fill(1)} : column;
}
