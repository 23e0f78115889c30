/**
 * Bytes that are put aside and read again, in the order of somebody else: in memory while they are few, else in a file of
 * the system's folder for temporary files. The file has no name any more once it is open, so nothing is left behind
 * however the process ends.
 */
import { closeSync, mkdtempSync, openSync, readSync, rmSync, writeSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** Held in memory up to here: as much as a certificate in one object may have. */
const HELD_BYTES = 8_000_000;

/** Where a piece lies. */
export interface Place {
  readonly at: number;
  readonly bytes: number;
}

export class Spool {
  private bytes = 0;
  private held = new Map<number, Uint8Array>();
  private file: number | null = null;

  constructor(private readonly heldBytes = HELD_BYTES) {}

  keep(piece: Uint8Array): Place {
    const place = { at: this.bytes, bytes: piece.length };
    this.bytes += piece.length;
    if (this.bytes <= this.heldBytes) {
      this.held.set(place.at, piece);
      return place;
    }
    if (this.file === null) {
      this.file = nameless();
      for (const [at, earlier] of this.held) write(this.file, earlier, at);
      this.held = new Map();
    }
    write(this.file, piece, place.at);
    return place;
  }

  read({ at, bytes }: Place): Uint8Array {
    if (bytes === 0) return new Uint8Array(0);
    if (this.file === null) return this.held.get(at)!;
    const piece = new Uint8Array(bytes);
    for (let done = 0; done < bytes;) {
      const read = readSync(this.file, piece, done, bytes - done, at + done);
      if (read === 0) throw new RangeError(`the spool ends before ${at + bytes}`);
      done += read;
    }
    return piece;
  }

  close(): void {
    if (this.file !== null) closeSync(this.file);
    this.file = null;
    this.held = new Map();
  }
}

function nameless(): number {
  const folder = mkdtempSync(join(tmpdir(), 'palmette-'));
  try {
    return openSync(join(folder, 'spool'), 'wx+', 0o600);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function write(file: number, piece: Uint8Array, at: number): void {
  for (let done = 0; done < piece.length;) done += writeSync(file, piece, done, piece.length - done, at + done);
}
