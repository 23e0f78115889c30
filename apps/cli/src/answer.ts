/** `palmette answer`: one question, or one a line. Of a long list nothing is held whole. */
import { availableParallelism } from 'node:os';
import { once } from 'node:events';
import { answerOnAllCores, openThreads, type AnswerEnd, type Refused } from '@palmette/threads';
import { answerOptions, withOptions, type AnswerOptions } from './answer-options.ts';
import { fileArgument, readAll, readLines, UsageError } from './read-input.ts';

const EXIT = { settled: 0, open: 3, refused: 2 } as const;

export async function answer(args: readonly string[]): Promise<number> {
  const options = answerOptions(args);
  const file = fileArgument(options.rest, 'answer');
  return options.lines ? answerLines(file, options) : answerOne(file, options);
}

async function answerOne(file: string, options: AnswerOptions): Promise<number> {
  const document = withOptions((await readAll(file)).toString('utf8'), options);
  const end = await answerOnAllCores(document, { threads: availableParallelism(), memoryBytes: memoryBytes(), write });
  if (end.kind === 'refused') {
    process.stderr.write(`${refusalLine(end)}\n`);
    return EXIT.refused;
  }
  if (end.reason !== undefined) process.stderr.write(`${openLine(end.reason)}\n`);
  return end.settled ? EXIT.settled : EXIT.open;
}

/** Bound of a thread's own search memory, from the setting that the stations read too (.env.example). */
function memoryBytes(): number {
  const text = process.env['MEMORY_MIB_PER_THREAD'] || '1024';
  const mebibytes = Number(text);
  if (!(mebibytes > 0))
    throw new UsageError(`MEMORY_MIB_PER_THREAD: expected a number above 0, found ${JSON.stringify(text)}`);
  return mebibytes * 1024 * 1024;
}

const openLine = (reason: string) => `open: ${reason}; nothing can be concluded`;

function refusalLine(refusal: Refused): string {
  const place = refusal.path === undefined || refusal.path === '' ? '' : `${refusal.path}: `;
  return `Refused: ${place}${refusal.message.replaceAll(/\s+/g, ' ')}`;
}

/** Questions in flight for each thread: enough that none waits for the order of output. */
const IN_FLIGHT = 16;

/** Answers come out in the order of the questions; a refused line gets an error and the rest goes on. */
async function answerLines(file: string, options: AnswerOptions): Promise<number> {
  const threads = openThreads({ threads: availableParallelism() });
  const flying: Promise<AnswerEnd>[] = [];
  const bound = memoryBytes();
  let open = false;
  let landed = 0;
  const land = async () => {
    const end = await flying.shift()!;
    landed += 1;
    if (end.kind === 'refused') {
      const { code, message, path } = end;
      await write(`${JSON.stringify({ error: { code, message, ...(path === undefined ? {} : { path }) } })}\n`);
      return;
    }
    open ||= !end.settled;
    if (end.reason !== undefined) process.stderr.write(`line ${landed}: ${openLine(end.reason)}\n`);
    for (const bytes of end.certificate) await write(bytes);
  };
  try {
    for await (const line of readLines(file)) {
      const document = withOptions(line, options);
      flying.push(threads.run({ kind: 'answer', document, oneLine: true, memoryBytes: bound }).end);
      if (flying.length >= IN_FLIGHT * threads.size) await land();
    }
    while (flying.length > 0) await land();
  } finally {
    await threads.close();
  }
  return open ? EXIT.open : EXIT.settled;
}

async function write(bytes: Uint8Array | string): Promise<void> {
  if (!process.stdout.write(bytes)) await once(process.stdout, 'drain');
}
