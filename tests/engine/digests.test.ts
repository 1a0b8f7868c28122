import canonicalizeModule from 'canonicalize';
import {createHash} from 'node:crypto';
import fc from 'fast-check';
import {expect, test} from 'vitest';

import type {FieldRequest} from '../../shared/api.ts';
import {filledRequest} from '../../server/engine/filled-request.ts';
import {compute} from './compute.ts';

// The package is CommonJS and its types are not: what is imported is the function itself.
const canonicalize = canonicalizeModule as unknown as (value: unknown) => string;

const sha256 = (data: string | Uint8Array): string =>
  `sha-256:${createHash('sha256').update(data).digest('hex')}`;

const number = fc.double({min: -1e24, max: 1e24, noNaN: true});
const vector = fc.tuple(number, number, number);
const requests = fc.record(
  {
    units: fc.record(
      {
        potential: fc.constantFrom('kV', 'V'),
        length: fc.constantFrom('mm', 'µm', 'Å'),
        charge: fc.constantFrom('nC', 'e'),
      },
      {requiredKeys: []},
    ),
    targets: fc.oneof(
      fc.record({
        points: fc.record({z: fc.tuple(number), y: fc.tuple(number), x: fc.tuple(number)}),
      }),
      fc.record({
        grid: fc.record({
          steps: fc.tuple(vector, vector, vector),
          origin: vector,
          counts: fc.constant([1, 1, 1]),
        }),
      }),
      fc.record({path: fc.record({vertices: fc.tuple(vector, vector), samples: fc.constant(2)})}),
    ),
    bodies: fc.array(
      fc.record(
        {
          placement: fc.oneof(
            fc.record({translate: vector, rotate: fc.record({degrees: number, axis: vector})}),
            fc.record({matrix: fc.array(number, {minLength: 16, maxLength: 16})}),
          ),
          id: fc.string({unit: 'grapheme', minLength: 1}),
          charges: fc.record({
            z: fc.tuple(number),
            x: fc.tuple(number),
            charge: fc.tuple(number),
            y: fc.tuple(number),
          }),
        },
        {requiredKeys: ['charges']},
      ),
      {minLength: 1, maxLength: 3},
    ),
    medium: fc.record({relativePermittivity: fc.constantFrom(1, 2.2)}, {requiredKeys: []}),
    accuracy: fc.record({bounds: fc.boolean()}, {requiredKeys: []}),
    onCoincidence: fc.constantFrom('mask', 'reject'),
    coincidenceDistance: fc.constantFrom(0, 1e-9),
    quantities: fc.constantFrom(['potential', 'field'], ['fieldGradient', 'potential']),
  },
  {requiredKeys: ['bodies', 'targets']},
);

test('the JSON of a filled request is its canonical form (RFC 8785)', () => {
  fc.assert(
    fc.property(requests, request => {
      // Built by the shape of the contract; that it holds is checked elsewhere.
      const filled = filledRequest('fields', request as FieldRequest);
      expect(JSON.stringify(filled)).toBe(canonicalize(filled));
    }),
    {seed: 1, numRuns: 500},
  );
});

const small: FieldRequest = {
  units: {length: 'mm', charge: 'nC'},
  bodies: [{charges: {x: [0, 1], y: [0, 2], z: [0, 3], charge: [1, -2]}}],
  targets: {points: {x: [0, 5], y: [0, 5], z: [0, 5]}},
};

test('the input digest is that of the request with its defaults filled in', () => {
  const {answer} = compute('fields', small);
  // By hand: members in order of code units, numbers as ECMAScript prints them.
  const expected =
    '{"accuracy":{"bounds":false},' +
    '"bodies":[{"charges":{"charge":[1,-2],"x":[0,1],"y":[0,2],"z":[0,3]},"id":"body-0"}],' +
    '"coincidenceDistance":0,"medium":{"relativePermittivity":1},"onCoincidence":"mask",' +
    '"quantities":["potential","field"],' +
    '"targets":{"points":{"x":[0,5],"y":[0,5],"z":[0,5]}},' +
    '"units":{"charge":"nC","field":"V/m","length":"mm","potential":"V"}}';
  expect(answer.inputDigest).toBe(sha256(expected));
});

test('a request that says what is the default has the same digest', () => {
  const spelled: FieldRequest = {
    ...small,
    quantities: ['potential', 'field'],
    onCoincidence: 'mask',
    accuracy: {bounds: false},
    medium: {},
  };
  const {answer} = compute('fields', small);
  expect(compute('fields', spelled).answer.inputDigest).toBe(answer.inputDigest);
  const other = compute('fields', {...small, medium: {relativePermittivity: 2}}).answer;
  expect(other.inputDigest).not.toBe(answer.inputDigest);
});

test('the result digest can be worked out from the answer: doubles in order, null as the quiet NaN', () => {
  const {answer} = compute('fields', {...small, accuracy: {bounds: true}});
  const values = Object.values(answer.columns).flat();
  const bytes = Buffer.alloc(8 * values.length);
  values.forEach((value, i) => {
    if (value === null) bytes.writeBigUInt64LE(0x7ff8000000000000n, 8 * i);
    else bytes.writeDoubleLE(value, 8 * i);
  });
  expect(values).toContain(null);
  expect(answer.resultDigest).toBe(sha256(bytes));
});

test('the digests of forces and moments are over their numbers in the order of the answer', () => {
  const digest = (...parts: unknown[]): string => {
    const found: number[] = [];
    const walk = (value: unknown): void => {
      if (typeof value === 'number') found.push(value);
      else if (typeof value === 'object' && value !== null) Object.values(value).forEach(walk);
      else if (value === null) found.push(NaN);
    };
    parts.forEach(walk);
    const bytes = Buffer.alloc(8 * found.length);
    found.forEach((value, i) =>
      Number.isNaN(value)
        ? bytes.writeBigUInt64LE(0x7ff8000000000000n, 8 * i)
        : bytes.writeDoubleLE(value, 8 * i),
    );
    return sha256(bytes);
  };
  const bodies = [
    {charges: {x: [0, 1], y: [0, 2], z: [0, 3], charge: [1, -1]}},
    {charges: {x: [4], y: [4], z: [4], charge: [1]}},
  ];
  const forces = compute('forces', {
    bodies,
    include: ['charges', 'internalEnergy'],
    probes: {x: [9], y: [9], z: [9], charge: [2]},
    accuracy: {bounds: true},
  }).answer;
  const {bodies: felt, energy, interactions, charges, probes} = forces;
  expect(forces.resultDigest).toBe(digest(felt, energy, interactions, charges, probes));
  const moments = compute('moments', {bodies}).answer;
  expect(moments.bodies[0].centre).toBeNull();
  expect(moments.resultDigest).toBe(digest(moments.bodies, moments.assembly, moments.about));
});
