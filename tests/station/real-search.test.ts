/** A real search from end to end: question text in, settled and checked certificate and a letter out. */
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { check } from '@palmette/checker';
import { answerAlone } from '@palmette/threads';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { keptLetters, startLocalMail, type LocalMail } from './local-mail.ts';
import { startPool, until, type PoolUnderTest, type ToyStation } from './pool-under-test.ts';

/** A dense lattice of rank 7 into Z^9, made at random, by rows: 302,724 nodes, 908 orbits, some seconds of work. */
const LONG = JSON.stringify({
  format: 'palmette.question/1',
  source: {
    kind: 'matrix',
    rows: [
      [14, -2, -6, 3, 1, -6, -7],
      [-2, 11, 2, 2, 2, 1, 6],
      [-6, 2, 13, -6, -1, -1, 3],
      [3, 2, -6, 11, 4, 0, 1],
      [1, 2, -1, 4, 13, 5, 1],
      [-6, 1, -1, 0, 5, 20, -2],
      [-7, 6, 3, 1, 1, -2, 24],
    ],
  },
  target: { excess: 2 },
  scope: 'all',
  method: 'rows',
});

let database: TestDatabase;
let pool: PoolUnderTest;
let ada: Awaited<ReturnType<PoolUnderTest['person']>>;
let mail: LocalMail;

beforeAll(async () => {
  database = await testDatabase();
  pool = await startPool(database);
  ada = await pool.person('ada');
  mail = await startLocalMail(join(pool.folder, 'letters'));
});
afterAll(async () => {
  await pool?.close();
  await mail?.stop();
  await database?.drop();
});

/** Nothing is settled at the first look, and checkpoints come often, so that there is a middle to kill it in. */
function start(name: string): Promise<ToyStation> {
  const env = { SMTP_URL: `smtp://127.0.0.1:${mail.port}`, QUICK_CPU_MS: '0', CHECKPOINT_SECONDS: '0.05' };
  return pool.station(name, 2, env, 'apps/station/src/main.ts');
}

function aloneAnswer(document: string): string {
  const answer = answerAlone(document);
  if (answer.kind === 'refused') throw new Error(answer.message);
  return Buffer.concat(answer.certificate).toString('utf8');
}

describe('a real search', () => {
  it('cut into parcels and killed in the middle ends in the same bytes as one run alone', async () => {
    const first = await start('killed');
    const { id } = await pool.askDocument(ada, LONG, 'matrix 7 × 7');
    await until('it is in the middle', async () => {
      const listing = (await pool.parcels(id)).filter((p) => p.phase === 'listing');
      return listing.some((p) => Number(p.nodes) > 0) && listing.some((p) => p.state !== 'done');
    });
    first.signal('SIGKILL');
    await first.gone();
    expect(['waiting', 'searching']).toContain((await pool.view(ada, id)).state);

    await start('heir');
    const seen = await pool.reaches(ada, id, ['settled', 'broken'], 120);
    expect(seen).toMatchObject({ state: 'settled', verdict: 'embeds', ground: 'exhaustion', rank: 7, dimension: 9 });
    const certificate = await pool.certificate(id);
    expect(certificate === aloneAnswer(LONG)).toBe(true);
    expect(check(Buffer.from(certificate))).toMatchObject({ verdict: 'VERIFIED', line: seen.certificate!.checkerLine });
    expect(new Set((await pool.parcels(id)).map((p) => p.phase))).toEqual(
      new Set(['choosing', 'listing', 'assembling', 'checking']),
    );

    const letters = await until('the letter', async () => {
      const kept = await keptLetters(mail.folder);
      return kept.length > 0 && kept;
    });
    expect(letters.map((l) => l.subject)).toEqual(['Embeds in Z^9: matrix 7 × 7']);
    expect(letters[0]!.text).toContain(`${seen.orbits} orbits, list complete. Ground: exhaustion; checked.`);
  });

  it.each([
    ['17/5, the least n', { kind: 'fraction', p: 17, q: 5 }, { least: {} }, { verdict: 'embeds', dimension: 5 }],
    // at n = rank the determinant has to be a square, and 17 is none (MATHEMATICS.md, arithmetic grounds)
    [
      '17/5 at its rank',
      { kind: 'fraction', p: 17, q: 5 },
      { excess: 0 },
      { verdict: 'excluded', ground: 'determinant' },
    ],
  ])('%s', async (label, source, target, expected) => {
    const document = JSON.stringify({ format: 'palmette.question/1', source, target, scope: 'all' });
    const { id } = await pool.askDocument(ada, document, label);
    expect(await pool.reaches(ada, id, ['settled', 'broken'])).toMatchObject({ state: 'settled', ...expected });
    expect(await pool.certificate(id)).toBe(aloneAnswer(document));
  });

  it('whose form is indefinite is broken, and the reason names the signature', async () => {
    const source = { kind: 'matrix', rows: [[1, 0], [0, -1]] }; // prettier-ignore
    const document = JSON.stringify({ format: 'palmette.question/1', source, target: { excess: 0 }, scope: 'all' });
    const { id } = await pool.askDocument(ada, document, 'matrix 2 × 2');
    const seen = await pool.reaches(ada, id, ['settled', 'broken']);
    expect(seen.state).toBe('broken');
    expect(seen.reason).toMatch(/\/source.*signature/);
  });
});
