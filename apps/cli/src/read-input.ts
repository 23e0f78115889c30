/** FILE or standard input, plain or gzip. FILE is relative to the caller's folder, which npm keeps in INIT_CWD. */
import { createReadStream } from 'node:fs';
import { resolve } from 'node:path';
import { Readable } from 'node:stream';
import { createGunzip } from 'node:zlib';

/** The command line itself is wrong, or its file cannot be read. */
export class UsageError extends Error {
  override readonly name = 'UsageError';
}

/** The uncompressed bytes of a file, piece by piece. */
export async function* readInput(file: string): AsyncGenerator<Uint8Array> {
  const source = file === '-' ? process.stdin : createReadStream(resolve(process.env['INIT_CWD'] ?? '.', file));
  const chunks = source[Symbol.asyncIterator]() as AsyncIterator<Buffer>;
  try {
    const first = await chunks.next();
    if (first.done === true) return;
    const all = Readable.from(resumed(first.value, chunks));
    const gzip = first.value[0] === 0x1f && first.value[1] === 0x8b;
    yield* (gzip ? all.pipe(createGunzip()) : all) as AsyncIterable<Uint8Array>;
  } catch (error) {
    throw new UsageError(`cannot read ${file === '-' ? 'standard input' : file}: ${(error as Error).message}`);
  }
}

async function* resumed(first: Buffer, rest: AsyncIterator<Buffer>): AsyncGenerator<Buffer> {
  yield first;
  for (let next = await rest.next(); next.done !== true; next = await rest.next()) yield next.value;
}

export async function readAll(file: string): Promise<Buffer> {
  const chunks: Uint8Array[] = [];
  for await (const chunk of readInput(file)) chunks.push(chunk);
  return Buffer.concat(chunks);
}

/** Lines without their line feed; an empty last line is none. A line that is too long is an error of its own. */
export async function* readLines(file: string): AsyncGenerator<string> {
  const decoder = new TextDecoder('utf-8');
  let rest = '';
  for await (const chunk of readInput(file)) {
    const pieces = (rest + decoder.decode(chunk, { stream: true })).split('\n');
    rest = pieces.pop()!;
    yield* pieces;
  }
  rest += decoder.decode();
  if (rest !== '') yield rest;
}

/** The single FILE argument. */
export function fileArgument(args: readonly string[], command: string): string {
  const [file, ...more] = args;
  if (file === undefined) throw new UsageError(`${command}: expected a file, or - for standard input`);
  if (more.length > 0) throw new UsageError(`${command}: expected one file, found ${args.length}`);
  if (file.startsWith('-') && file !== '-') throw new UsageError(`${command}: unknown option ${file}`);
  return file;
}
