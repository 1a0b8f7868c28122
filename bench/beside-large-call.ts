import {Worker} from 'node:worker_threads';

import {printMachine, quantile, show, summarise} from './compare.ts';
import {startService, type Running} from './servers.ts';

// Question: how long does a second client wait for small calls while a call of 5e8 pairs computes?
// Control: the same client, while two threads of another kind keep both cores busy.
const ROUNDS = 7;
const SPINNERS = 2;
const PAUSE = 5; // ms between small calls, as of somebody who drags a part

const small = JSON.stringify({
  bodies: [{charges: {x: [0, 1], y: [0, 0], z: [0, 0], charge: [1e-9, -1e-9]}}],
  targets: {points: {x: [0.5], y: [1], z: [0]}},
});

const large = (() => {
  const charges = 5000;
  const spread = (step: number): number[] =>
    Array.from({length: charges}, (_, i) => ((i * step) % 1009) / 1009);
  return JSON.stringify({
    bodies: [
      {
        charges: {
          x: spread(7),
          y: spread(11),
          z: spread(13),
          charge: spread(17).map(value => 1e-9 * (value - 0.5)),
        },
      },
    ],
    // 5,000 charges at 100,000 targets are 5e8 pairs.
    targets: {
      grid: {
        origin: [2, 0, 0],
        steps: [
          [0.01, 0, 0],
          [0, 0.01, 0],
          [0, 0, 0.01],
        ],
        counts: [100, 100, 10],
      },
    },
  });
})();

async function post(
  {baseUrl, apiKey}: Running,
  operation: string,
  body: string,
): Promise<Response> {
  return fetch(`${baseUrl}/v1/${operation}`, {
    method: 'POST',
    headers: {'Content-Type': 'application/json', Authorization: `Bearer ${apiKey}`},
    body,
  });
}

/** Milliseconds of small calls, one after the other, until `isOver`. */
async function smallCalls(service: Running, isOver: () => boolean): Promise<number[]> {
  const times: number[] = [];
  while (!isOver()) {
    const start = performance.now();
    const response = await post(service, 'fields', small);
    await response.arrayBuffer();
    if (response.status !== 200) throw new Error(`a small call got ${response.status}`);
    times.push(performance.now() - start);
    await new Promise(done => setTimeout(done, PAUSE));
  }
  return times;
}

async function besideLargeCall(service: Running): Promise<{times: number[]; took: number}> {
  let isOver = false;
  const start = performance.now();
  const computing = post(service, 'potentials', large).then(async response => {
    const answer = (await response.json()) as {cost?: {pairs: number}};
    isOver = true;
    if (answer.cost?.pairs !== 5e8) throw new Error(`the large call got ${response.status}`);
  });
  const [times] = await Promise.all([smallCalls(service, () => isOver), computing]);
  return {times, took: performance.now() - start};
}

async function besideSpinners(service: Running, milliseconds: number): Promise<number[]> {
  const spinners = Array.from(
    {length: SPINNERS},
    () => new Worker('for (let x = 1; ; ) x = Math.sqrt(x + 1);', {eval: true}),
  );
  const end = performance.now() + milliseconds;
  const times = await smallCalls(service, () => performance.now() > end);
  await Promise.all(spinners.map(spinner => spinner.terminate()));
  return times;
}

const p99 = (times: number[]): number =>
  quantile(
    times.toSorted((a, b) => a - b),
    0.99,
  );

printMachine();
const service = await startService({LOG_LEVEL: 'warn'});
try {
  let warmUp = 500;
  await smallCalls(service, () => warmUp-- === 0);
  await besideLargeCall(service);
  const ratios: number[] = [];
  for (let round = 0; round < ROUNDS; round++) {
    const beside = await besideLargeCall(service);
    const control = await besideSpinners(service, beside.took);
    const ratio = p99(beside.times) / p99(control);
    ratios.push(ratio);
    process.stdout.write(
      `  large call ${(beside.took / 1000).toFixed(2)} s; p99 of small calls ${p99(beside.times).toFixed(2)} ms (${beside.times.length}), beside spinners ${p99(control).toFixed(2)} ms (${control.length}), ratio ${ratio.toFixed(2)}\n`,
    );
  }
  process.stdout.write(
    `p99 beside a 5e8-pair call ÷ beside two spinners: ${show(summarise(ratios))}\n`,
  );
} finally {
  await service.stop();
}
