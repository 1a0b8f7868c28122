import autocannon from 'autocannon';

import {printMachine, show, summarise} from './compare.ts';
import {startEcho, startService} from './servers.ts';

// Question: what does the whole path of a small call cost (key, burst, contract, ledger committed
// before the reply, log), against an Express that only parses JSON and sends it back?
const CONNECTIONS = 50;
const WARM_UP_REQUESTS = 10_000;
const REQUESTS = 5000;
const ROUNDS = 21;

const body = JSON.stringify({
  units: {length: 'mm', charge: 'nC'},
  bodies: [
    {
      id: 'bell',
      charges: {
        x: [34, 27.5, 10.5, -10.5, -27.5, -34, -27.5, -10.5, 10.5, 27.5],
        y: [0, 20, 32.3, 32.3, 20, 0, -20, -32.3, -32.3, -20],
        z: [58, 58, 58, 58, 58, 58, 58, 58, 58, 58],
        charge: [-3, -3, -3, -3, -3, -3, -3, -3, -3, -3],
      },
    },
  ],
  targets: {points: {x: [0], y: [0], z: [0]}},
});

interface Shot {
  readonly rate: number;
  readonly successes: number;
  readonly others: number;
}

// A number of requests, not a time: what is still open when time is up could not be counted.
async function fire(
  url: string,
  headers: Record<string, string>,
  amount = REQUESTS,
): Promise<Shot> {
  const started = performance.now();
  let last = started;
  const result = await new Promise<autocannon.Result>((done, fail) => {
    const shooting = autocannon(
      {
        url,
        method: 'POST',
        headers: {'Content-Type': 'application/json', ...headers},
        body,
        connections: CONNECTIONS,
        amount,
      },
      (error: unknown, outcome) => (error ? fail(new Error('autocannon failed')) : done(outcome)),
    );
    // The generator reports in whole seconds; the last answer is when it was really over.
    shooting.on('response', () => (last = performance.now()));
  });
  const others = result.non2xx + result.errors + result.timeouts;
  return {
    rate: (1000 * result['2xx']) / (last - started),
    successes: result['2xx'],
    others,
  };
}

printMachine();
const service = await startService();
const echo = await startEcho();
const auth = {Authorization: `Bearer ${service.apiKey}`};
const operation = `${service.baseUrl}/v1/fields`;
let counted = 0;
try {
  counted += (await fire(operation, auth, WARM_UP_REQUESTS)).successes;
  await fire(echo.baseUrl, {}, WARM_UP_REQUESTS);
  const ratios: number[] = [];
  for (let round = 0; round < ROUNDS; round++) {
    // Interleaved, the order swapped each round, so that a drift of the machine hits both.
    const first = round % 2 === 0 ? await fire(echo.baseUrl, {}) : null;
    const ours = await fire(operation, auth);
    const bare = first ?? (await fire(echo.baseUrl, {}));
    counted += ours.successes;
    ratios.push(ours.rate / bare.rate);
    process.stdout.write(
      `  service ${ours.rate.toFixed(0)}/s, echo ${bare.rate.toFixed(0)}/s, ratio ${(ours.rate / bare.rate).toFixed(3)}, other than 2xx ${ours.others}\n`,
    );
  }
  process.stdout.write(`small call ÷ bare Express echo: ${show(summarise(ratios), 3)}\n`);
  const usage = (await (await fetch(`${service.baseUrl}/v1/usage`, {headers: auth})).json()) as {
    calls: number;
  };
  process.stdout.write(`2xx answers ${counted}, calls in /v1/usage ${usage.calls}\n`);
  if (usage.calls !== counted) process.exitCode = 1;
} finally {
  await service.stop();
  await echo.stop();
}
