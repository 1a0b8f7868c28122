/** A measurement of a rate [million pairs a second]. */
export type Measure = () => number | Promise<number>;

/**
 * The best rate of every side. Measures each once a round, so that a drift of the machine hits all; the order turns
 * with the rounds. One round before is for warming up.
 */
export async function interleave<Sides extends Readonly<Record<string, Measure>>>(
  sides: Sides,
  rounds: number,
): Promise<Record<keyof Sides, number>> {
  const names: (keyof Sides)[] = Object.keys(sides);
  const best = {} as Record<keyof Sides, number>;
  for (const name of names) {
    await sides[name]();
    best[name] = 0;
  }
  for (let round = 0; round < rounds; round++) {
    for (let n = 0; n < names.length; n++) {
      const name = names[(n + round) % names.length];
      best[name] = Math.max(best[name], await sides[name]());
    }
  }
  return best;
}

/** [million pairs a second of CPU time] of this process */
export function cpuRate(pairs: number, work: () => void): number {
  const start = process.cpuUsage();
  work();
  const {user, system} = process.cpuUsage(start);
  return pairs / (user + system);
}

/** Prints a ratio beside what it is to be at least, or at most. */
export function printRatio(
  name: string,
  ratio: number,
  bar: {readonly atLeast: number} | {readonly atMost: number},
): void {
  const isReached = 'atLeast' in bar ? ratio >= bar.atLeast : ratio <= bar.atMost;
  const asked = 'atLeast' in bar ? `at least ${bar.atLeast}` : `at most ${bar.atMost}`;
  process.stdout.write(
    `${name.padEnd(58)}${ratio.toFixed(3)}   ${asked}${isReached ? '' : '   MISSED'}\n`,
  );
  if (!isReached) process.exitCode = 1;
}
