/**
 * The connection to PostgreSQL: TypeORM's pool for everything, and one connection of its own for heartbeats, so that
 * a full pool never makes a living station look dead. Nothing here tries anything twice: a fault of the connection
 * reaches the caller as the driver's error.
 */
import { Pool } from 'pg';
import { DataSource, type EntityManager, type QueryRunner } from 'typeorm';
import { ENTITIES } from './entities/index.ts';
import { MIGRATIONS } from './migrations/index.ts';

/** Runs SQL with $1, $2, … and gives the rows. */
export interface Sql {
  query<T>(text: string, values?: readonly unknown[]): Promise<T[]>;
  /** Gives the number of rows that were changed. */
  change(text: string, values?: readonly unknown[]): Promise<number>;
}

/** An open transaction; `manager` works within it. */
export interface Transaction extends Sql {
  readonly manager: EntityManager;
}

export interface DatabaseOptions {
  readonly databaseUrl: string;
  readonly schema: string;
  readonly applicationName: string;
  readonly onError: (error: unknown) => void;
}

const POOL_SIZE = 10;
const CONNECT_MS = 10_000;
/** A process that froze inside a transaction loses it, and with it the locks for which everybody else waits. */
const IDLE_MS = 10_000;
/** A heartbeat that takes longer is none. */
const BEAT_MS = 10_000;
/** Short enough that ours and the queue's, `<schema>_queue`, fit the queue's own limit of 50. */
const SCHEMA_NAME = /^[a-z][a-z0-9_]{0,39}$/;

export class SchemaNameFault extends Error {
  override readonly name = 'SchemaNameFault';
}

export function schemaName(name: string | undefined): string {
  const schema = name ?? 'palmette';
  if (!SCHEMA_NAME.test(schema))
    throw new SchemaNameFault(
      `DATABASE_SCHEMA: expected a small letter, then up to 39 small letters, digits or _, found ${JSON.stringify(schema)}`,
    );
  return schema;
}

/** The settings of every connection, ours and the queue's listener's. */
export function connectionOptions({ databaseUrl, schema, applicationName }: DatabaseOptions) {
  return {
    connectionString: databaseUrl,
    application_name: applicationName,
    options: `-c search_path=${schema} -c TimeZone=UTC -c idle_in_transaction_session_timeout=${IDLE_MS}`,
    connectionTimeoutMillis: CONNECT_MS,
    keepAlive: true,
  };
}

export class Database implements Sql {
  private constructor(
    readonly source: DataSource,
    readonly options: DatabaseOptions,
    private readonly beats: Pool,
  ) {}

  static async open(options: DatabaseOptions): Promise<Database> {
    const source = new DataSource({
      type: 'postgres',
      url: options.databaseUrl,
      schema: options.schema,
      applicationName: options.applicationName,
      entities: [...ENTITIES],
      migrations: [...MIGRATIONS],
      migrationsTableName: 'migration',
      synchronize: false,
      installExtensions: false,
      logging: false,
      poolErrorHandler: options.onError,
      extra: { ...connectionOptions(options), max: POOL_SIZE },
    });
    await source.initialize();
    const beats = new Pool({ ...connectionOptions(options), max: 1, query_timeout: BEAT_MS });
    beats.on('error', options.onError);
    return new Database(source, options, beats);
  }

  async query<T>(text: string, values: readonly unknown[] = []): Promise<T[]> {
    return this.withRunner((runner) => over(runner).query<T>(text, values));
  }

  async change(text: string, values: readonly unknown[] = []): Promise<number> {
    return this.withRunner((runner) => over(runner).change(text, values));
  }

  async transaction<T>(work: (tx: Transaction) => Promise<T>): Promise<T> {
    return this.withRunner(async (runner) => {
      await runner.startTransaction();
      try {
        const result = await work({ ...over(runner), manager: runner.manager });
        await runner.commitTransaction();
        return result;
      } catch (error) {
        // where the connection is gone there is nothing to roll back: the first error says more than the second
        if (runner.isTransactionActive) await runner.rollbackTransaction().catch(() => undefined);
        throw error;
      }
    });
  }

  /** On the connection that is kept for heartbeats. */
  async beat<T>(text: string, values: readonly unknown[]): Promise<T[]> {
    return (await this.beats.query(text, values as unknown[])).rows as T[];
  }

  async close(): Promise<void> {
    await this.beats.end();
    await this.source.destroy();
  }

  private async withRunner<T>(work: (runner: QueryRunner) => Promise<T>): Promise<T> {
    const runner = this.source.createQueryRunner();
    try {
      return await work(runner);
    } finally {
      await runner.release();
    }
  }
}

/** TypeORM's plain `query` mixes rows and counts; only with the third argument are the rows what they seem. */
function over(runner: QueryRunner): Sql {
  return {
    query: async <T>(text: string, values: readonly unknown[] = []) =>
      (await runner.query(text, values as unknown[], true)).records as T[],
    change: async (text, values = []) => (await runner.query(text, values as unknown[], true)).affected ?? 0,
  };
}
