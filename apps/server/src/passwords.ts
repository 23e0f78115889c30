/** Passwords: keyed hash, then bcrypt in a thread; an unknown e-mail costs as much time as a wrong password. */
import { createHmac } from 'node:crypto';
import { Refusal } from '@palmette/contracts';
import { openThreadPool } from './thread-pool.ts';
import type { PasswordTask } from './threads/password.ts';

export interface Passwords {
  hash(password: string): Promise<string>;
  /** False too if there is no hash, after the same work. */
  matches(password: string, hash: string | null): Promise<boolean>;
  close(): Promise<void>;
}

export function openPasswords(key: string): Passwords {
  const pool = openThreadPool('password', { maxThreads: 2, maxQueue: 200 });
  const keyed = (password: string) => createHmac('sha256', key).update(password, 'utf8').digest('base64');
  const run = async (task: PasswordTask): Promise<string | boolean> => {
    try {
      return (await pool.run(task)) as string | boolean;
    } catch (error) {
      if ((error as Error).message.includes('queue'))
        throw new Refusal('too-many', 'too many people sign in at this moment; try again in a minute');
      throw error;
    }
  };
  let decoy: Promise<string> | undefined;
  const hash = async (password: string) => (await run({ op: 'hash', keyed: keyed(password) })) as string;
  return {
    hash,
    async matches(password, stored) {
      decoy ??= hash('a password that nobody has');
      const equal = (await run({ op: 'compare', keyed: keyed(password), hash: stored ?? (await decoy) })) as boolean;
      return stored !== null && equal;
    },
    close: () => pool.destroy(),
  };
}
