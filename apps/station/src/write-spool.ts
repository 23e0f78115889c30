/**
 * Results that could not be written because the database was away, as files. They are read again when a station starts
 * in the same folder; the attempt in the lease decides there, as everywhere, whether they still count.
 */
import { mkdirSync, readFileSync, readdirSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { deserialize, serialize } from 'node:v8';
import type { CheckpointWrite, Lease } from '@palmette/store';
import type { Log } from './log.ts';

const ENDING = '.result';

/** What is still to be written: a checkpoint, and how the parcel ended, if it did. */
export interface Unwritten {
  readonly lease: Lease;
  readonly write: CheckpointWrite;
  readonly ending: 'running' | 'released' | 'done' | 'found';
}

export class WriteSpool {
  constructor(
    private readonly folder: string,
    private readonly log: Log,
  ) {}

  /** A disk that does not take it is said and borne: the result is still in memory. */
  keep(unwritten: Unwritten): void {
    const file = this.fileOf(unwritten.lease);
    try {
      mkdirSync(this.folder, { recursive: true });
      writeFileSync(`${file}.part`, serialize(unwritten));
      renameSync(`${file}.part`, file);
    } catch (error) {
      this.log.error({ file, fault: String(error) }, 'a result cannot be kept on disk');
    }
  }

  drop(lease: Lease): void {
    rmSync(this.fileOf(lease), { force: true });
  }

  /** Everything kept, oldest lease first. A file that cannot be read is set aside, never written. */
  all(): Unwritten[] {
    let files: string[];
    try {
      files = readdirSync(this.folder).filter((f) => f.endsWith(ENDING));
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code === 'ENOENT') return [];
      throw error;
    }
    return files.sort().flatMap((file) => {
      const path = join(this.folder, file);
      try {
        return [deserialize(readFileSync(path)) as Unwritten];
      } catch (error) {
        this.log.error({ file: path, fault: String(error) }, 'a kept result cannot be read and is set aside');
        renameSync(path, `${path}.unreadable`);
        return [];
      }
    });
  }

  private fileOf(lease: Lease): string {
    return join(this.folder, `${lease.parcelId.padStart(12, '0')}-${lease.attempt}${ENDING}`);
  }
}
