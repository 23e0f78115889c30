/** A store on a schema of its own, with people, a study and questions of a toy kind: the store never reads a lattice. */
import { createHash } from 'node:crypto';
import { afterAll } from 'vitest';
import { Client } from 'pg';
import {
  migrate,
  openStore,
  type Actor,
  type CheckpointWrite,
  type FoundChunk,
  type FoundPlace,
  type Lease,
  type LetterWriter,
  type Store,
  type StoreOptions,
  type VerdictWrite,
} from '@palmette/store';
import { testDatabase } from './test-database.ts';

export const LETTERS: LetterWriter = ({ ending, question, person }) => ({
  subject: `${ending}: ${question.title ?? question.sourceLabel}`,
  body: `Dear ${person.name}`,
});

export interface Fixture {
  readonly store: Store;
  readonly options: StoreOptions;
  readonly errors: unknown[];
  /** Looks into the tables, for invariants. */
  sql<T>(text: string, values?: readonly unknown[]): Promise<T[]>;
  /** Another store on the same database: another station process. */
  another(): Promise<Store>;
  person(name: string, allowance?: { workers: number; cpuSecondsPerDay: number }): Promise<Actor>;
  study(by: Actor, title?: string): Promise<string>;
  ask(
    by: Actor,
    studyId: string,
    title?: string,
    more?: { budgetCpuMs?: number; scope?: 'one' | 'all' },
  ): Promise<string>;
  station(workers?: number, store?: Store): Promise<string>;
  claim(station: string, store?: Store, alone?: boolean): Promise<Lease | null>;
  /** Nothing of an earlier test runs or waits, and no station of it is there. */
  clear(): Promise<void>;
  /** Waits until the condition holds; fails after ten seconds. */
  until(what: string, look: () => Promise<boolean> | boolean): Promise<void>;
}

export async function openFixture(options: Partial<StoreOptions> = {}): Promise<Fixture> {
  const database = await testDatabase();
  const errors: unknown[] = [];
  const settings: StoreOptions = {
    databaseUrl: database.databaseUrl,
    schema: database.schema,
    applicationName: 'palmette test',
    defaultAllowance: { workers: 2, cpuSecondsPerDay: 3_600 },
    poolTimeZone: 'UTC',
    onError: (error) => errors.push(error),
    ...options,
  };
  await migrate(settings);
  const store = await openStore(settings);
  const stores = [store];
  const client = new Client({
    connectionString: database.databaseUrl,
    options: `-c search_path=${database.schema} -c TimeZone=UTC`,
    application_name: 'palmette test reader',
  });
  await client.connect();
  afterAll(async () => {
    await Promise.all(stores.map((s) => s.close()));
    await client.end();
    await database.drop();
  });
  let stations = 0;
  return {
    store,
    options: settings,
    errors,
    sql: async <T>(text: string, values: readonly unknown[] = []) =>
      (await client.query(text, values as unknown[])).rows as T[],
    async another() {
      const next = await openStore(settings);
      stores.push(next);
      return next;
    },
    async person(name, allowance) {
      const { id, role } = await store.people.create({
        email: `${name.toLowerCase()}@store.example`,
        name,
        role: 'researcher',
        passwordHash: 'none',
        ...(allowance === undefined ? {} : { allowance }),
      });
      return { id, role };
    },
    study: async (by, title = 'A study') => (await store.studies.make(by, title)).id,
    async ask(by, studyId, title = 'A question', { budgetCpuMs, scope = 'all' } = {}) {
      const document = JSON.stringify({ format: 'palmette.question/1', target: { dimension: 3 }, scope, title });
      const made = await store.questions.ask(by, {
        studyId,
        title,
        document,
        sourceKind: 'fraction',
        sourceLabel: '17/5',
        budgetCpuMs: budgetCpuMs ?? null,
      });
      return made.id;
    },
    async station(workers = 1, at = store) {
      const id = crypto.randomUUID();
      stations += 1;
      await at.work.registerStation({ id, name: `station ${stations}`, version: '0', workers });
      return id;
    },
    claim: (station, at = store, alone = true) =>
      at.work.claim(station, { freeWorkers: 1, revisions: [1], canRunAlone: alone }),
    async clear() {
      await client.query(`update parcel set state = 'unneeded' where state in ('waiting', 'leased')`);
      await client.query(`update search set state = 'withdrawn' where state not in ('settled', 'broken')`);
      await client.query('update station set stopped_at = now() where stopped_at is null');
    },
    async until(what, look) {
      for (const deadline = Date.now() + 10_000; Date.now() < deadline;) {
        if (await look()) return;
        await new Promise((resolve) => setTimeout(resolve, 10));
      }
      throw new Error(`${what}: not within ten seconds`);
    },
  };
}

export function written(more: Partial<CheckpointWrite> = {}): CheckpointWrite {
  return {
    checkpoint: '',
    nodes: 0n,
    orbits: 0n,
    cpuMs: 0,
    shareDone: 0,
    nodesPerSecond: null,
    chunks: [],
    ...more,
  };
}

export function verdict(text = 'a certificate', more: Partial<VerdictWrite> = {}): VerdictWrite {
  const raw = [new TextEncoder().encode(text)];
  return {
    verdict: 'embeds',
    ground: 'embedding',
    complete: true,
    rank: 2,
    dimension: 3,
    orbits: 1n,
    total: 48n,
    certificate: { sha256: sha256(raw), raw, checkerLine: 'VERIFIED', checkerRevision: 1, checkCpuMs: 5 },
    ...more,
  };
}

/** Everything that stage 1 found, chunk by chunk. */
export async function foundIn(store: Store, searchId: string): Promise<FoundChunk[]> {
  const chunks: FoundChunk[] = [];
  for (let after: FoundPlace | null = null; ;) {
    const chunk: FoundChunk | null = await store.work.found(searchId, 1, after);
    if (chunk === null) return chunks;
    chunks.push(chunk);
    after = chunk.place;
  }
}

export function sha256(raw: readonly Uint8Array[]): string {
  const hash = createHash('sha256');
  for (const part of raw) hash.update(part);
  return hash.digest('hex');
}

/** Plans a search of so many parcels: the choosing worker goes on to listing. */
export async function plan(store: Store, lease: Lease, parcels: number): Promise<void> {
  await store.work.goOn(lease.searchId, {
    phase: 'listing',
    stage: 1,
    stageResults: '{"stage":1}',
    facts: { rank: 2, method: 'By rows.', plan: '{"revision":1}', estimate: '{"mean":1000,"low":500,"high":2000}' },
    parcels: Array.from({ length: parcels }, (_, i) => ({
      from: i === 0 ? [] : [i],
      to: i === parcels - 1 ? null : [i + 1],
      share: 1 / parcels,
    })),
  });
}
