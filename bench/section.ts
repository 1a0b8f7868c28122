import {createWorkshop} from '../tests/support/workshop.ts';
import {printMachine, show, summarise} from './compare.ts';
import {startService} from './servers.ts';
import {cube, generator, points, withCharges} from './shapes.ts';

// Question: what do reading, checking, charging and writing JSON cost beside the kernel? 1e3 charges
// on a section of 300 × 300 nodes through the public API on one thread, wall clock, against the
// kernel alone at as many points; both in turn.
const ROUNDS = 9;
const CHARGES = 1000;
const SIDE = 300;

printMachine();
const random = generator(5);
const charges = withCharges(points(CHARGES, cube(random)), random);
const targets = points(SIDE * SIDE, cube(random));
const workshop = createWorkshop(2 ** 28);
const body = JSON.stringify({
  bodies: [
    {
      charges: {
        x: [...charges.x],
        y: [...charges.y],
        z: [...charges.z],
        charge: [...charges.charge],
      },
    },
  ],
  targets: {
    grid: {
      origin: [0.001, 0.001, 0.501],
      steps: [
        [1 / SIDE, 0, 0],
        [0, 1 / SIDE, 0],
        [0, 0, 0],
      ],
      counts: [SIDE, SIDE, 1],
    },
  },
});

const service = await startService({THREADS: '1'});
try {
  const ratios: number[] = [];
  let bytes = 0;
  for (let round = 0; round < ROUNDS; round++) {
    const start = performance.now();
    const response = await fetch(`${service.baseUrl}/v1/fields`, {
      method: 'POST',
      headers: {'Content-Type': 'application/json', Authorization: `Bearer ${service.apiKey}`},
      body,
    });
    if (response.status !== 200) throw new Error(`the section got ${response.status}`);
    bytes = (await response.arrayBuffer()).byteLength;
    const whole = performance.now() - start;
    const {steps} = workshop.compute({charges, targets});
    const kernel = steps.find(({name}) => name === 'direct')?.milliseconds ?? NaN;
    ratios.push(whole / kernel);
  }
  process.stdout.write(
    `1e3 charges, section of 300 × 300, ${(bytes / 1e6).toFixed(1)} MB of JSON: call ÷ kernel ${show(summarise(ratios))}\n`,
  );
} finally {
  await service.stop();
}
