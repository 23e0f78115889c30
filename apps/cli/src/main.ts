/** `palmette answer | check`: reads the command, calls the door of a package, prints. */
import { answer } from './answer.ts';
import { checkFile } from './check-file.ts';
import { UsageError } from './read-input.ts';

const USAGE = `palmette answer FILE|-           question document in, certificate out
palmette answer --lines FILE|-   one question a line in, one compact certificate a line out, in order
   --method rows|columns|frames  forces a method; left out, the engine chooses
   --second-opinion              answers by two methods and says whether they agree
palmette check FILE|-            checks a certificate; the last line is the outcome

FILE may be gzip; - is standard input.
Exit of answer: 0 settled, 3 open, 2 refused. Exit of check: 0 VERIFIED, 1 not, 2 could not read.`;

async function main(args: readonly string[]): Promise<number> {
  const [command, ...rest] = args;
  if (command === 'answer') return answer(rest);
  if (command === 'check') return checkFile(rest);
  if (command === '--help' || command === 'help') {
    process.stdout.write(`${USAGE}\n`);
    return 0;
  }
  throw new UsageError(command === undefined ? 'expected a command' : `expected answer or check, found ${command}`);
}

// a reader that has seen enough (head, less) closes the pipe: that is no fault
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code === 'EPIPE') process.exit(0);
  throw error;
});

try {
  process.exitCode = await main(process.argv.slice(2));
} catch (error) {
  if (!(error instanceof UsageError)) throw error;
  process.stderr.write(`${error.message}\n\n${USAGE}\n`);
  process.exitCode = 2;
}
