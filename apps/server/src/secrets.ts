/** Secrets from the environment, or made once and kept in a file that only the owner reads. */
import { randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const SHORTEST = 32;

export class SecretFault extends Error {
  override readonly name = 'SecretFault';
}

/** @throws SecretFault if the secret in the environment is too short to be one */
export function readSecret(env: Readonly<Record<string, string | undefined>>, name: string, folder: string): string {
  const given = env[name];
  if (given) {
    if (given.length < SHORTEST)
      throw new SecretFault(`${name}: expected at least ${SHORTEST} characters, found ${given.length}`);
    return given;
  }
  const file = join(folder, 'secrets.json');
  const kept = existsSync(file) ? (JSON.parse(readFileSync(file, 'utf8')) as Record<string, string>) : {};
  const known = kept[name];
  if (known !== undefined) return known;
  const made = randomBytes(48).toString('base64url');
  mkdirSync(folder, { recursive: true });
  writeFileSync(file, JSON.stringify({ ...kept, [name]: made }), { mode: 0o600 });
  return made;
}
