/** A lease as the worker gets it, and the guard that every write of a worker passes. */
import { createHash } from 'node:crypto';
import type { SearchPhase, SearchState } from '@palmette/contracts';
import type { Transaction } from '../database.ts';
import { FencedOff, type Lease } from '../door.ts';

export interface LeaseRow {
  parcel_id: string;
  attempt: number;
  search_id: string;
  person_id: string;
  phase: SearchPhase;
  stage: number;
  from_address: number[];
  to_address: number[] | null;
  checkpoint: string | null;
  checkpoint_sha256: string | null;
  chunks: number;
  alone: boolean;
  cpu_ms: string;
  nodes: string;
  orbits: string;
  document: string;
  plan: string | null;
  stage_results: string;
  budget_cpu_ms: string | null;
  search_cpu_ms: string;
}

export function checksum(checkpoint: string): string {
  return createHash('sha256').update(checkpoint).digest('hex');
}

/** A checkpoint whose checksum is wrong is worth nothing: the parcel then begins again, with nothing counted. */
export async function readLease(tx: Transaction, row: LeaseRow): Promise<Lease> {
  const spoilt = row.checkpoint !== null && checksum(row.checkpoint) !== row.checkpoint_sha256;
  if (spoilt)
    await tx.change(
      `update parcel set checkpoint = null, checkpoint_sha256 = null, nodes = 0, orbits = 0, chunks = 0, share_done = 0
       where id = $1`,
      [row.parcel_id],
    );
  return {
    parcelId: row.parcel_id,
    attempt: row.attempt,
    searchId: row.search_id,
    personId: row.person_id,
    phase: row.phase,
    stage: row.stage,
    from: row.from_address,
    to: row.to_address,
    checkpoint: spoilt ? null : row.checkpoint,
    chunks: spoilt ? 0 : row.chunks,
    alone: row.alone,
    cpuMs: Number(row.cpu_ms),
    nodes: spoilt ? 0n : BigInt(row.nodes),
    orbits: spoilt ? 0n : BigInt(row.orbits),
    document: row.document,
    plan: row.plan,
    stageResults: row.stage_results,
    budgetLeftMs: row.budget_cpu_ms === null ? null : Number(row.budget_cpu_ms) - Number(row.search_cpu_ms),
  };
}

export interface LockedSearch {
  id: string;
  question_id: string;
  person_id: string;
  state: SearchState;
  phase: SearchPhase | null;
  stage: number;
  cpu_ms: string;
  budget_cpu_ms: string | null;
  had_quantum: boolean;
}

/** The lock under which everything about a search is decided. @throws FencedOff if there is no such search */
export async function lockSearch(tx: Transaction, searchId: string): Promise<LockedSearch> {
  const [search] = await tx.query<LockedSearch>(
    `select id, question_id, person_id, state, phase, stage, cpu_ms, budget_cpu_ms, had_quantum
     from search where id = $1 for no key update`,
    [searchId],
  );
  if (search === undefined) throw new FencedOff(`there is no search ${searchId}`);
  return search;
}

export function fencedOff(lease: Lease): FencedOff {
  return new FencedOff(`parcel ${lease.parcelId}, attempt ${lease.attempt}: the lease has ended`);
}

/** Where nothing of a search runs any more it waits again. Called with the search locked. */
export async function settleDown(tx: Transaction, searchId: string): Promise<void> {
  await tx.change(
    `update search set state = 'waiting' where id = $1 and state = 'searching'
       and not exists (select 1 from parcel where search_id = $1 and state = 'leased')`,
    [searchId],
  );
}
