/** Found orbits on their way to the database: JSON lines in pieces of at most about 1 MiB. */
import type { FoundOrbit } from '@palmette/search';
import type { CheckpointMessage } from './jobs.ts';

const CHUNK_CHARACTERS = 1024 * 1024;

export function packFound(found: readonly FoundOrbit[]): CheckpointMessage['chunks'] {
  const chunks: { records: number; raw: Uint8Array }[] = [];
  let lines: string[] = [];
  let characters = 0;
  const close = () => {
    if (lines.length > 0)
      chunks.push({ records: lines.length, raw: new TextEncoder().encode(`${lines.join('\n')}\n`) });
    lines = [];
    characters = 0;
  };
  for (const orbit of found) {
    const line = JSON.stringify(orbit);
    if (characters > 0 && characters + line.length > CHUNK_CHARACTERS) close();
    lines.push(line);
    characters += line.length + 1;
  }
  close();
  return chunks;
}

export function unpackFound(chunks: readonly Uint8Array[]): FoundOrbit[] {
  return chunks.flatMap((raw) =>
    new TextDecoder()
      .decode(raw)
      .split('\n')
      .filter((line) => line !== '')
      .map((line) => JSON.parse(line) as FoundOrbit),
  );
}
