/**
 * Writes a parcel's checkpoints, one at a time. While one is on its way, or while the database is away, later ones are
 * put together; none is dropped and none is counted twice.
 */
import { FencedOff, type CheckpointWrite } from '@palmette/store';
import type { CheckpointMessage } from '@palmette/threads';
import type { Desk } from './desk.ts';
import type { HeldParcel } from './held-parcel.ts';
import { writeThrough } from './write-once.ts';
import type { Unwritten } from './write-spool.ts';

/** With this much waiting to be written a thread yields: the rest of its work can wait for the database. */
const BACKLOG_BYTES = 64 * 1024 * 1024;

export class ParcelWriter {
  private pending: CheckpointWrite | null = null;
  private onItsWay: Promise<void> = Promise.resolve();
  private busy = false;
  private failed: { readonly fault: unknown; readonly unwritten: Unwritten } | null = null;

  constructor(
    private readonly held: HeldParcel,
    private readonly desk: Desk,
  ) {}

  /** Takes a checkpoint of the thread and writes it as soon as possible. */
  push(message: CheckpointMessage): void {
    this.pending = joined(this.pending, writeOf(message));
    if (bytesOf(this.pending) > BACKLOG_BYTES) this.held.follow('yield');
    if (!this.busy) this.onItsWay = this.writeAll();
  }

  /** Everything that was pushed is written. @throws FencedOff, or what the database refused */
  async written(): Promise<void> {
    await this.onItsWay;
    if (this.failed !== null) throw this.failed.fault;
  }

  /** The last write of the parcel, with how it ended. @throws FencedOff */
  async end(last: CheckpointMessage, ending: Exclude<Unwritten['ending'], 'running'>): Promise<void> {
    await this.onItsWay;
    if (this.failed !== null) {
      const { fault, unwritten } = this.failed;
      if (!this.held.lost)
        this.desk.spool.keep({
          lease: unwritten.lease,
          write: joined(this.pending === null ? unwritten.write : joined(unwritten.write, this.pending), writeOf(last)),
          ending,
        });
      throw fault;
    }
    await this.put({ lease: this.held.lease, write: writeOf(last), ending });
  }

  private async writeAll(): Promise<void> {
    this.busy = true;
    while (this.pending !== null && this.failed === null) {
      const unwritten: Unwritten = { lease: this.held.lease, write: this.pending, ending: 'running' };
      this.pending = null;
      try {
        this.held.follow(await this.put(unwritten));
      } catch (fault) {
        this.failed = { fault, unwritten };
        if (fault instanceof FencedOff) this.held.lose();
        else this.held.kill();
      }
    }
    this.busy = false;
  }

  private async put(unwritten: Unwritten) {
    const { write } = unwritten;
    const advice = await writeThrough(this.desk, unwritten);
    const { lease } = this.held;
    this.held.lease = {
      ...lease,
      checkpoint: write.checkpoint,
      chunks: lease.chunks + write.chunks.length,
      nodes: lease.nodes + write.nodes,
      orbits: lease.orbits + write.orbits,
      cpuMs: lease.cpuMs + write.cpuMs,
    };
    return advice;
  }
}

function writeOf(message: CheckpointMessage): CheckpointWrite {
  const { checkpoint, nodes, orbits, cpuMs, shareDone, nodesPerSecond, chunks } = message;
  return { checkpoint, nodes, orbits, cpuMs, shareDone, nodesPerSecond, chunks };
}

/** Several writes as one: the counts added, the newest place. */
function joined(earlier: CheckpointWrite | null, later: CheckpointWrite): CheckpointWrite {
  if (earlier === null) return later;
  return {
    ...later,
    nodes: earlier.nodes + later.nodes,
    orbits: earlier.orbits + later.orbits,
    cpuMs: earlier.cpuMs + later.cpuMs,
    chunks: [...earlier.chunks, ...later.chunks],
  };
}

function bytesOf(write: CheckpointWrite): number {
  return write.chunks.reduce((sum, chunk) => sum + chunk.raw.byteLength, 0);
}
