/** `palmette check`: the independent checker on one file; the last line of stdout is the outcome. */
import { check } from '@palmette/checker';
import { fileArgument, readAll } from './read-input.ts';

const EXIT = { VERIFIED: 0, REJECTED: 1, 'NOT CHECKED': 2 } as const;

export async function checkFile(args: readonly string[]): Promise<number> {
  const outcome = check(await readAll(fileArgument(args, 'check')));
  process.stdout.write(`${outcome.line}\n`);
  return EXIT[outcome.verdict];
}
