import {hash, verify, type Options} from '@node-rs/argon2';

// OWASP Password Storage Cheat Sheet: argon2id (the package's default) with 19 MiB, 2 passes.
const options: Options = {memoryCost: 19_456, timeCost: 2, parallelism: 1};

export function hashPassword(password: string): Promise<string> {
  return hash(password, options);
}

let decoy: Promise<string> | undefined;

/** Whether the password fits. An unknown person (null) costs the same time as a known one. */
export async function passwordFits(storedHash: string | null, password: string): Promise<boolean> {
  decoy ??= hashPassword('nobody has this password');
  const fits = await verify(storedHash ?? (await decoy), password);
  return fits && storedHash !== null;
}
