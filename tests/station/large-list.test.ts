/** Lists too long for one object: read, written and checked piece by piece, and killed in the middle of that. */
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { answerAlone } from '@palmette/threads';
import { check } from '@palmette/checker';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { rightCertificate, startPool, until, type PoolUnderTest } from './pool-under-test.ts';

let database: TestDatabase;
let pool: PoolUnderTest;
let ada: Awaited<ReturnType<PoolUnderTest['person']>>;

beforeEach(async () => {
  database = await testDatabase();
  pool = await startPool(database);
  ada = await pool.person('ada');
});
afterEach(async () => {
  await pool?.close();
  await database?.drop();
});

const REAL = 'apps/station/src/main.ts';

/** m·I_k in Z^n. */
const multiple = (m: number, k: number, n: number, more: object = {}) =>
  JSON.stringify({
    format: 'palmette.question/1',
    source: { kind: 'matrix', rows: Array.from({ length: k }, (_, i) => Array.from({ length: k }, (_, j) => (i === j ? m : 0))) }, // prettier-ignore
    target: { dimension: n },
    scope: 'all',
    ...more,
  });

describe('a large list', () => {
  it('killed while its certificate is written chunk by chunk, is begun again and ends with the same bytes', async () => {
    const first = await pool.station('killed', 2);
    const { id, document } = await pool.ask(ada, 20_000, 'spin 1, chunk every 100');
    const count = async (table: 'blob' | 'draft_chunk') =>
      (await pool.sql<{ rows: number }>(`select count(*)::int as rows from ${table}`))[0]!.rows;
    await until('some chunks are kept', async () => (await count('blob')) >= 3);
    first.signal('SIGKILL');
    await first.gone();
    expect(await count('draft_chunk')).toBe(0);
    expect(await pool.store.questions.certificate(id)).toBeNull();
    expect((await pool.parcels(id)).at(-1)).toMatchObject({ phase: 'assembling', state: 'leased', attempt: 1 });

    await pool.station('heir', 2);
    expect(await pool.reaches(ada, id, ['settled', 'broken'])).toMatchObject({ state: 'settled', verdict: 'embeds' });
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    expect((await pool.parcels(id)).find((p) => p.phase === 'assembling')!.attempt).toBeGreaterThan(1);
    expect(await count('draft_chunk')).toBe(0);
  });

  it('of a real search has the bytes that it has when it is held whole', async () => {
    await pool.station('real', 2, { QUICK_CPU_MS: '0' }, REAL);
    const tests = ['pair', 'complement'];
    const document = multiple(6, 4, 16, { tests });
    const { id } = await pool.askDocument(ada, document, 'matrix 4 × 4');
    const seen = await pool.reaches(ada, id, ['settled', 'broken'], 120);
    // sums of squares of 6 and their Gram, counted by this engine: only the comparison below is a check of it
    expect(seen).toMatchObject({ state: 'settled', verdict: 'embeds', ground: 'exhaustion', orbits: '10558' });
    const alone = answerAlone(document);
    if (alone.kind === 'refused') throw new Error(alone.message);
    const certificate = await pool.certificate(id);
    expect(certificate === Buffer.concat(alone.certificate).toString()).toBe(true);
    expect(certificate.split('\n', 1)[0]).toContain('"embeddings":{"chunks":[');
    expect(check(Buffer.from(certificate)).line).toBe(seen.certificate!.checkerLine);
    const [pieces] = await pool.sql<{ most: number; pieces: number }>(
      'select max(raw_bytes) as most, count(*)::int as pieces from blob',
    );
    expect(pieces!.most).toBeLessThanOrEqual(1024 * 1024);
    expect(pieces!.pieces).toBeGreaterThan(3);
  });

  // the columns of 30·I_5 and what is left of them at each depth are about 1.6 MB by the engine's count
  it('whose search would take more memory than a thread may is spent, and the reason has the figure', async () => {
    await pool.station('narrow', 1, { QUICK_CPU_MS: '0', MEMORY_MIB_PER_THREAD: '1' }, REAL);
    const { id } = await pool.askDocument(ada, multiple(30, 5, 12, { method: 'columns' }), '30·I_5');
    const seen = await pool.reaches(ada, id, ['settled', 'broken', 'spent'], 120);
    expect(seen.state).toBe('spent');
    expect(seen.reason).toMatch(/^a worker's bound of memory is used up \([1-9]\d* MiB counted\)/);
    expect(await pool.store.questions.certificate(id)).toBeNull();
  });
});
