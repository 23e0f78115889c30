/** Writes through outages that strike before or after the database took the write: nothing is lost or counted twice. */
import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { FencedOff, type CheckpointWrite, type Lease, type WorkStore } from '@palmette/store';
import type { CheckpointMessage } from '@palmette/threads';
import type { Desk } from './desk.ts';
import { HeldParcel } from './held-parcel.ts';
import { ParcelWriter } from './parcel-writer.ts';
import { Patience } from './patience.ts';
import { replaySpool } from './replay-spool.ts';
import { WriteSpool } from './write-spool.ts';

const quiet = { info: () => {}, warn: () => {}, error: () => {} };
const away = () => Object.assign(new Error('terminating connection'), { code: '57P01' });

const LEASE: Lease = {
  parcelId: '7',
  attempt: 1,
  searchId: 's',
  personId: 'p',
  phase: 'listing',
  stage: 0,
  from: [3, 1],
  to: null,
  checkpoint: null,
  chunks: 0,
  alone: false,
  cpuMs: 0,
  nodes: 0n,
  orbits: 0n,
  document: '{}',
  plan: '{}',
  stageResults: '[]',
  budgetLeftMs: null,
};

type Fault = 'none' | 'before' | 'after';

/** One parcel in memory that fences as the store does; each call takes the next fault from the list. */
class OneParcel {
  nodes = 0n;
  chunks: string[] = [];
  state: 'leased' | 'done' | 'waiting' = 'leased';
  attempt = 1;
  constructor(readonly faults: Fault[]) {}

  private take(lease: Lease, change: () => void): void {
    const fault = this.faults.shift() ?? 'none';
    if (fault === 'before') throw away();
    if (this.state !== 'leased' || lease.attempt !== this.attempt) throw new FencedOff('late');
    change();
    if (fault === 'after') throw away();
  }

  private add(lease: Lease, write: CheckpointWrite): void {
    this.nodes += write.nodes;
    this.chunks.splice(lease.chunks);
    this.chunks.push(...write.chunks.map((c) => new TextDecoder().decode(c.raw)));
  }

  readonly work = {
    checkpoint: async (lease: Lease, write: CheckpointWrite) => {
      this.take(lease, () => this.add(lease, write));
      return 'go on' as const;
    },
    finish: async (lease: Lease, write: CheckpointWrite) => {
      this.take(lease, () => {
        this.add(lease, write);
        this.state = 'done';
      });
      return true;
    },
    release: async (lease: Lease) => this.take(lease, () => (this.state = 'waiting')),
    parcels: async () => {
      if ((this.faults.shift() ?? 'none') === 'before') throw away();
      return [{ from: [3, 1], to: null, nodes: this.nodes, orbits: 0n, cpuMs: 0, result: null }];
    },
  } as unknown as WorkStore;
}

function message(no: number): CheckpointMessage {
  return {
    kind: 'checkpoint',
    checkpoint: `at ${no}`,
    nodes: 10n,
    orbits: 1n,
    cpuMs: 5,
    shareDone: no / 10,
    nodesPerSecond: null,
    chunks: [{ records: 1, raw: new TextEncoder().encode(`found ${no}`) }],
  };
}

let folder: string;
beforeEach(() => void (folder = mkdtempSync(join(tmpdir(), 'palmette-spool-'))));
afterEach(() => rmSync(folder, { recursive: true }));

function deskOver(parcel: OneParcel): Desk {
  const patience = new Patience(quiet, 1);
  return { work: parcel.work, patience, spool: new WriteSpool(folder, quiet), log: quiet } as unknown as Desk;
}

describe('the writer of a parcel', () => {
  it('counts everything once, whenever the connection breaks', async () => {
    const fault = fc.constantFrom<Fault>('none', 'before', 'after');
    await fc.assert(
      fc.asyncProperty(fc.array(fault, { maxLength: 12 }), fc.integer({ min: 0, max: 5 }), async (faults, count) => {
        const parcel = new OneParcel([...faults]);
        const writer = new ParcelWriter(new HeldParcel(LEASE), deskOver(parcel));
        for (let no = 0; no < count; no += 1) {
          writer.push(message(no));
          if (no % 2 === 0) await Promise.resolve();
        }
        await writer.end(message(count), 'done');
        expect(parcel.state).toBe('done');
        expect(parcel.nodes).toBe(10n * BigInt(count + 1));
        expect(parcel.chunks).toEqual(Array.from({ length: count + 1 }, (_, no) => `found ${no}`));
        expect(readdirSync(folder)).toEqual([]);
      }),
      { numRuns: 60 },
    );
  });

  it('keeps in the spool what the end of the process cuts off, and another process writes it', async () => {
    const parcel = new OneParcel(Array.from({ length: 50 }, () => 'before' as const));
    const desk = deskOver(parcel);
    const held = new HeldParcel(LEASE);
    const writer = new ParcelWriter(held, desk);
    writer.push(message(0));
    desk.patience.giveUp();
    await expect(writer.end(message(1), 'done')).rejects.toThrow('terminating');
    expect(readdirSync(folder)).toHaveLength(1);

    parcel.faults.length = 0;
    await replaySpool(deskOver(parcel));
    expect(parcel).toMatchObject({ nodes: 20n, state: 'done', chunks: ['found 0', 'found 1'] });
    expect(readdirSync(folder)).toEqual([]);
  });

  it('drops a kept result when the parcel went on without it', async () => {
    const parcel = new OneParcel([]);
    const desk = deskOver(parcel);
    desk.spool.keep({ lease: LEASE, write: message(0), ending: 'released' });
    Object.assign(parcel, { nodes: 500n, attempt: 2 });
    await replaySpool(desk);
    expect(parcel.nodes).toBe(500n);
    expect(readdirSync(folder)).toEqual([]);
  });

  it('lets go of a parcel that somebody else holds', async () => {
    const parcel = new OneParcel([]);
    parcel.attempt = 2;
    const held = new HeldParcel(LEASE);
    const writer = new ParcelWriter(held, deskOver(parcel));
    writer.push(message(0));
    await expect(writer.written()).rejects.toBeInstanceOf(FencedOff);
    expect(held.lost).toBe(true);
    expect(parcel.nodes).toBe(0n);
  });
});
