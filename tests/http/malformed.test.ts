import fc from 'fast-check';
import {afterAll, beforeAll, expect, test} from 'vitest';

import {operations} from '../../server/contract/document.ts';
import type {Problem} from '../../shared/api.ts';
import {faultsOf, problemSchema} from '../support/contract.ts';
import {startService, type TestService} from '../support/service.ts';

const RUNS = 2500;
const SEED = 20_261_201;

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

const examples = operations
  .filter(({path}) => path.startsWith('/v1/'))
  .flatMap(({path, object}) => {
    const example = object.requestBody?.content['application/json'].example;
    return example === undefined ? [] : [{path, text: JSON.stringify(example)}];
  });

/** What stands in the place of a value, a name or a byte. */
const oddValues = fc.oneof(
  fc.constantFrom(
    ...['null', 'true', '[]', '{}', '""', '-0', '1e999', '-1e999', '1e-999', '5e-324', '1e24'],
    ...['9007199254740993', '0.1e1', '01', '+1', '.5', 'NaN', 'Infinity', 'undefined', "'a'"],
    ...['"\\ud800"', '"\\u0000"', '"__proto__"', '"\u2028"', '[[[[[[[[[[]]]]]]]]]]', '[null]'],
  ),
  fc.json({maxDepth: 3}),
);

/** What might do in the place of a number. */
const numbers = fc.oneof(
  fc.integer({min: -9, max: 9}),
  fc.double({min: -1e3, max: 1e3, noNaN: true}),
  fc.double({noNaN: true, noDefaultInfinity: true}),
);

const HOW = [
  ...['number', 'number', 'number', 'value', 'value', 'value', 'name', 'name'],
  ...['cut', 'byte', 'repeat', 'drop'],
];

/** A valid body, damaged in one to three places. */
const damaged = fc
  .record({
    example: fc.constantFrom(...examples),
    damages: fc.array(
      fc.record({
        how: fc.constantFrom(...HOW),
        where: fc.double({min: 0, max: 1, noNaN: true}),
        length: fc.nat(40),
        value: oddValues,
        number: numbers,
        byte: fc.nat(255),
      }),
      {minLength: 1, maxLength: 3},
    ),
  })
  .map(({example, damages}) => {
    let bytes: Buffer = Buffer.from(example.text);
    for (const {how, where, length, value, number, byte} of damages) {
      const text = bytes.toString('utf8');
      const at = Math.floor(where * bytes.length);
      if (how === 'number')
        bytes = replaceOne(text, /-?\d[\d.e+-]*/g, where, JSON.stringify(number));
      if (how === 'value') bytes = replaceOne(text, /-?\d[\d.e+-]*|"[^"]*"(?!:)/g, where, value);
      if (how === 'name') bytes = replaceOne(text, /"[^"]*"(?=:)/g, where, JSON.stringify(value));
      if (how === 'cut') bytes = bytes.subarray(0, at);
      if (how === 'byte')
        bytes = Buffer.concat([bytes.subarray(0, at), Buffer.of(byte), bytes.subarray(at)]);
      if (how === 'repeat')
        bytes = Buffer.concat([bytes.subarray(0, at + length), bytes.subarray(at)]);
      if (how === 'drop')
        bytes = Buffer.concat([bytes.subarray(0, at), bytes.subarray(at + length)]);
    }
    return {path: example.path, bytes};
  });

function replaceOne(text: string, pattern: RegExp, where: number, value: string): Buffer {
  const places = [...text.matchAll(pattern)];
  const place = places[Math.floor(where * (places.length - 1))];
  if (!place) return Buffer.from(text);
  const end = place.index + place[0].length;
  return Buffer.from(text.slice(0, place.index) + value + text.slice(end));
}

test(`${RUNS} damaged bodies are answered or refused, and never a fault of ours`, async () => {
  const seen = new Map<number, number>();
  await fc.assert(
    fc.asyncProperty(damaged, async ({path, bytes}) => {
      const response = await fetch(service.baseUrl + path, {
        method: 'POST',
        headers: {
          Authorization: `Bearer ${service.key.secret}`,
          'Content-Type': 'application/json',
        },
        body: new Uint8Array(bytes),
      });
      const {status} = response;
      seen.set(status, (seen.get(status) ?? 0) + 1);
      const answer: unknown = await response.json();
      if (status === 200) return;
      expect([400, 422], JSON.stringify(answer)).toContain(status);
      expect(faultsOf(problemSchema, answer)).toEqual([]);
      const {errors = [], errorCount = 0} = answer as Problem;
      expect(errors.length).toBe(Math.min(20, errorCount));
    }),
    {numRuns: RUNS, seed: SEED, endOnFailure: true},
  );
  // Of each kind there were enough for the test to mean something.
  for (const status of [200, 400, 422]) expect(seen.get(status)).toBeGreaterThan(50);
  expect((await fetch(`${service.baseUrl}/readyz`)).status).toBe(200);
  expect(service.logLines.filter(line => line.includes('"level":50'))).toEqual([]);
});
