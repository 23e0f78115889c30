/** `palmette check`: the independent checker on one file; the last line of stdout is the outcome. */
import { check } from '@palmette/checker';
import { fileArgument, readAll } from './read-input.ts';

export async function checkFile(args: readonly string[]): Promise<number> {
  const outcome = check(await readAll(fileArgument(args, 'check')));
  process.stdout.write(`${outcome.line}\n`);
  return outcome.verdict === 'VERIFIED' ? 0 : 1;
}
