/** Thread: bcrypt blocks, so it runs here. The password was hashed with a server key before (bcrypt reads 72 bytes only). */
import { compare, hash } from 'bcryptjs';

const ROUNDS = 11;

export type PasswordTask =
  | { readonly op: 'hash'; readonly keyed: string }
  | { readonly op: 'compare'; readonly keyed: string; readonly hash: string };

export default async function runPasswordTask(task: PasswordTask): Promise<string | boolean> {
  return task.op === 'hash' ? hash(task.keyed, ROUNDS) : compare(task.keyed, task.hash);
}
