/** The nudge queue on pg-boss 10, in a schema of its own beside ours. Nothing else knows this library. */
import PgBoss from 'pg-boss';
import { connectionOptions, type DatabaseOptions, type Sql } from '../database.ts';
import type { NudgeQueue } from './nudge-queue.ts';

const QUEUE = 'work';
/** Idle stations are woken by NOTIFY; this is how soon they see a nudge if that was lost. */
const LOOK_EVERY_SECONDS = 2;
const TAKEN_AT_ONCE = 100;

export function queueSchema(schema: string): string {
  return `${schema}_queue`;
}

export function pgBossNudges(options: DatabaseOptions, sql: Sql): NudgeQueue {
  const schema = queueSchema(options.schema);
  /** Sends need no connection of their own: they go through the caller's. */
  const sender = new PgBoss({ schema, db: executor(sql), migrate: false, supervise: false, schedule: false });
  sender.on('error', options.onError);
  let taker: PgBoss | null = null;

  const open = async (migrate: boolean) => {
    const { connectionString, application_name } = connectionOptions(options);
    const boss = new PgBoss({
      connectionString,
      application_name,
      schema,
      max: 2,
      migrate,
      supervise: !migrate,
      schedule: false,
    });
    boss.on('error', options.onError);
    await boss.start().catch(async (error: unknown) => {
      // a start that failed is not stopped by `stop`: its pool would go on
      await (boss.getDb() as PgBoss.Db & { close?(): Promise<void> }).close?.();
      throw error;
    });
    return boss;
  };

  return {
    async install() {
      const boss = await open(true);
      await boss.createQueue(QUEUE, { name: QUEUE, policy: 'standard', retryLimit: 0 });
      await boss.stop({ graceful: false });
    },
    async send(tx) {
      // a send to a queue that does not exist answers null and does nothing
      const id = await sender.send(QUEUE, {}, { db: executor(tx) });
      if (id === null) throw new Error(`the queue ${schema}.${QUEUE} does not exist`);
    },
    async take(call) {
      taker = await open(false);
      await taker.work(QUEUE, { pollingIntervalSeconds: LOOK_EVERY_SECONDS, batchSize: TAKEN_AT_ONCE }, async () =>
        call(),
      );
    },
    async waiting() {
      return sender.getQueueSize(QUEUE);
    },
    async close() {
      await taker?.stop({ graceful: false });
      taker = null;
    },
  };
}

function executor(sql: Sql): PgBoss.Db {
  return { executeSql: async (text, values) => ({ rows: await sql.query(text, values) }) };
}
