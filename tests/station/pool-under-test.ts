/**
 * A pool for one test file: a schema of its own on a real PostgreSQL, people and a study, station processes with the toy
 * engine that can be frozen and killed, and a local mail server.
 */
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Client } from 'pg';
import { migrate, openStore, type Actor, type Store } from '@palmette/store';
import type { QuestionView } from '@palmette/contracts';
import { until } from '../stack/stack.ts';
import { readToy, toyCertificate, toyDocument } from './toy-question.ts';

export { until } from '../stack/stack.ts';

const root = fileURLToPath(new URL('../..', import.meta.url));
const FROM_SOURCE = ['--conditions=source', '--import', 'tsx'];

export interface ToyStation {
  readonly child: ChildProcess;
  readonly log: string[];
  signal(signal: NodeJS.Signals): void;
  /** Waits for the end of the process. */
  gone(): Promise<number | null>;
}

export interface ParcelRow {
  readonly id: string;
  readonly phase: string;
  readonly state: string;
  readonly attempt: number;
  readonly station_id: string | null;
  readonly from_address: readonly string[];
  readonly nodes: string;
  readonly cpu_ms: string;
  readonly crashes: number;
  readonly checkpoint: Buffer | null;
}

export interface PoolUnderTest {
  readonly store: Store;
  readonly sql: <T>(text: string, values?: unknown[]) => Promise<T[]>;
  readonly folder: string;
  person(name: string, workers?: number): Promise<Actor & { readonly studyId: string }>;
  ask(
    by: Actor & { readonly studyId: string },
    n: number,
    title?: string,
    budgetCpuMs?: number,
  ): Promise<{ id: string; document: string }>;
  askDocument(
    by: Actor & { readonly studyId: string },
    document: string,
    sourceLabel: string,
    title?: string,
    budgetCpuMs?: number,
  ): Promise<{ id: string; document: string }>;
  view(by: Actor, id: string): Promise<Omit<QuestionView, 'document'>>;
  parcels(questionId: string): Promise<ParcelRow[]>;
  /** Waits until a question is in one of the states. */
  reaches(by: Actor, id: string, states: readonly string[], seconds?: number): Promise<Omit<QuestionView, 'document'>>;
  /** The certificate's text, which must be what an uninterrupted count gives. */
  certificate(id: string): Promise<string>;
  /** @param file what to run: the toy's station, or the real one */
  station(name: string, workers: number, env?: Readonly<Record<string, string>>, file?: string): Promise<ToyStation>;
  close(): Promise<void>;
}

export async function startPool(database: {
  readonly databaseUrl: string;
  readonly schema: string;
}): Promise<PoolUnderTest> {
  const { databaseUrl, schema } = database;
  const folder = mkdtempSync(join(tmpdir(), 'palmette-pool-'));
  const options = {
    databaseUrl,
    schema,
    applicationName: 'palmette test',
    defaultAllowance: { workers: 8, cpuSecondsPerDay: 100_000 },
    poolTimeZone: 'UTC',
    onError: () => {}, // the tests of outages take the database away
  };
  await migrate(options);
  const store = await openStore(options);
  const stations = new Set<ToyStation>();

  /** A connection for each look: the tests restart the database under it. */
  async function sql<T>(text: string, values: unknown[] = []): Promise<T[]> {
    const client = new Client({ connectionString: databaseUrl, application_name: 'palmette test' });
    client.on('error', () => {});
    await client.connect();
    try {
      await client.query(`set search_path to ${schema}`);
      return (await client.query(text, values)).rows as T[];
    } finally {
      await client.end();
    }
  }

  const view: PoolUnderTest['view'] = async (by, id) => {
    const seen = await store.questions.view(by.id, id);
    if (seen === null) throw new Error(`no question ${id}`);
    return seen;
  };

  const askDocument: PoolUnderTest['askDocument'] = async (by, document, sourceLabel, title, budgetCpuMs) => {
    const { id } = await store.questions.ask(by, {
      studyId: by.studyId,
      title: title ?? null,
      document,
      sourceKind: 'fraction',
      sourceLabel,
      budgetCpuMs: budgetCpuMs ?? null,
    });
    return { id, document };
  };

  return {
    store,
    sql,
    folder,
    async person(name, workers = 8) {
      const { id } = await store.people.create({
        email: `${name}@pool.example`,
        name,
        role: 'researcher',
        passwordHash: 'none',
        allowance: { workers, cpuSecondsPerDay: 100_000 },
      });
      const actor = { id, role: 'researcher' as const };
      const study = await store.studies.make(actor, `Study of ${name}`);
      return { ...actor, studyId: study.id };
    },
    ask: (by, n, title = '', budgetCpuMs) => askDocument(by, toyDocument(n, title), `${n}/1`, title, budgetCpuMs),
    askDocument,
    view,
    parcels: (questionId) =>
      sql<ParcelRow>(
        `select p.id, p.phase, p.state, p.attempt, p.station_id, p.from_address, p.nodes, p.cpu_ms, p.crashes, p.checkpoint
           from parcel p join search s on s.id = p.search_id where s.question_id = $1 order by p.id`,
        [questionId],
      ),
    reaches: (by, id, states, seconds = 60) =>
      until(
        `question ${id} is ${states.join(' or ')}`,
        async () => {
          const seen = await view(by, id);
          return states.includes(seen.state) && seen;
        },
        seconds,
      ),
    async certificate(id) {
      const kept = await store.questions.certificate(id);
      if (kept === null) throw new Error(`question ${id} has no certificate`);
      const parts: Uint8Array[] = [];
      for await (const chunk of kept.chunks) parts.push(chunk);
      return Buffer.concat(parts).toString('utf8');
    },
    async station(name, workers, env = {}, file = 'tests/station/toy-station.ts') {
      const child = spawn(process.execPath, [...FROM_SOURCE, file], {
        cwd: root,
        stdio: ['ignore', 'pipe', 'pipe'],
        env: {
          ...process.env,
          TSX_TSCONFIG_PATH: join(root, 'tsconfig.base.json'),
          DATABASE_URL: databaseUrl,
          DATABASE_SCHEMA: schema,
          SMTP_URL: '',
          PUBLIC_URL: 'https://pool.example',
          STATION_NAME: name,
          STATION_WORKERS: String(workers),
          LEASE_SECONDS: '2',
          HEARTBEAT_SECONDS: '0.5',
          SWEEP_SECONDS: '0.5',
          CHECKPOINT_SECONDS: '0.1',
          SPOOL_FOLDER: join(folder, `spool-${name}`),
          ...env,
        },
      });
      const log: string[] = [];
      for (const stream of [child.stdout, child.stderr])
        stream.on('data', (data: Buffer) => log.push(...data.toString().split('\n').filter(Boolean)));
      const end = new Promise<number | null>((resolve) => child.once('exit', (code) => resolve(code)));
      const station: ToyStation = {
        child,
        log,
        signal: (signal) => void child.kill(signal),
        gone: () => end,
      };
      stations.add(station);
      await until(`station ${name} takes work`, () => {
        if (log.some((line) => line.includes('taking work'))) return true;
        throw new Error(`station ${name}, exit ${child.exitCode}, said: ${log.join('\n')}`);
      });
      return station;
    },
    async close() {
      for (const { child } of stations) {
        child.kill('SIGCONT');
        child.kill('SIGTERM');
      }
      await Promise.all(
        [...stations].map(async ({ child, gone }) => {
          const late = setTimeout(() => child.kill('SIGKILL'), 20_000);
          await gone();
          clearTimeout(late);
        }),
      );
      await store.close();
    },
  };
}

/** What the certificate of a toy question has to be, whatever happened on the way. */
export const rightCertificate = (document: string): string => toyCertificate(readToy(document));
