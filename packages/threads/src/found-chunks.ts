/** Found orbits on their way to the database: JSON lines in pieces of at most about 1 MiB. */
import type { FoundOrbit } from '@palmette/search';
import type { CheckpointMessage } from './jobs.ts';

const CHUNK_CHARACTERS = 1024 * 1024;

/** Packs what is found as it is found: text takes a fraction of the memory of the orbits. */
export class FoundPacker {
  /** What is held here, in characters (all of them ASCII). */
  bytes = 0;
  private readonly encoder = new TextEncoder();
  private chunks: { records: number; raw: Uint8Array }[] = [];
  private lines: string[] = [];
  private characters = 0;

  add(found: readonly FoundOrbit[]): void {
    for (const orbit of found) {
      const line = JSON.stringify(orbit);
      if (this.characters > 0 && this.characters + line.length > CHUNK_CHARACTERS) this.close();
      this.lines.push(line);
      this.characters += line.length + 1;
      this.bytes += line.length + 1;
    }
  }

  /** The chunks since the last call. */
  take(): CheckpointMessage['chunks'] {
    this.close();
    const { chunks } = this;
    this.chunks = [];
    this.bytes = 0;
    return chunks;
  }

  private close(): void {
    if (this.lines.length === 0) return;
    this.chunks.push({ records: this.lines.length, raw: this.encoder.encode(`${this.lines.join('\n')}\n`) });
    this.lines = [];
    this.characters = 0;
  }
}

/** Orbits one by one; of the chunks one is held at a time. Can be walked through again if the chunks can. */
export function unpackFound(chunks: Iterable<Uint8Array>): Iterable<FoundOrbit> {
  return {
    *[Symbol.iterator]() {
      for (const raw of chunks)
        for (const line of new TextDecoder().decode(raw).split('\n'))
          if (line !== '') yield JSON.parse(line) as FoundOrbit;
    },
  };
}
