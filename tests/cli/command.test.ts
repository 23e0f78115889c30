/** The command line as INTERFACES.md fixes it, run as a whole process. */
import { spawn } from 'node:child_process';
import { mkdtempSync, writeFileSync } from 'node:fs';
import { gzipSync } from 'node:zlib';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { answerAlone } from '@palmette/threads';

const root = fileURLToPath(new URL('../..', import.meta.url));
const folder = mkdtempSync(join(tmpdir(), 'palmette-cli-'));

interface Ran {
  readonly code: number;
  readonly out: string;
  readonly err: string;
}

function palmette(
  args: readonly string[],
  input: string | Uint8Array = '',
  settings: Readonly<Record<string, string>> = {},
): Promise<Ran> {
  return new Promise((resolve) => {
    const child = spawn(process.execPath, [join(root, 'docker-free-scripts/palmette.mjs'), ...args], {
      env: { ...process.env, INIT_CWD: folder, ...settings },
    });
    const out: Buffer[] = [];
    const err: Buffer[] = [];
    child.stdout.on('data', (d: Buffer) => out.push(d));
    child.stderr.on('data', (d: Buffer) => err.push(d));
    child.on('close', (code) =>
      resolve({ code: code ?? -1, out: Buffer.concat(out).toString(), err: Buffer.concat(err).toString() }),
    );
    child.stdin.end(input);
  });
}

const question = (source: unknown, target: unknown = { excess: 0 }, more: object = {}) =>
  JSON.stringify({ format: 'palmette.question/1', source, target, scope: 'all', ...more });
const a2 = {
  kind: 'matrix',
  rows: [
    [2, -1],
    [-1, 2],
  ],
};
const p357 = { kind: 'montesinos', pretzel: [3, 5, -7] };
const e8 = {
  kind: 'tree',
  vertices: ['a', 'b', 'c', 'd', 'e', 'f', 'g', 'h'].map((name) => ({ name, weight: -2 })),
  edges: [
    ['a', 'b'],
    ['b', 'c'],
    ['c', 'd'],
    ['d', 'e'],
    ['e', 'f'],
    ['f', 'g'],
    ['c', 'h'],
  ],
};

interface Certificate {
  readonly claim: {
    readonly verdict: string;
    readonly ground: string | null;
    readonly dimension: number | null;
    readonly complete: boolean;
    readonly orbits?: string;
    readonly total?: string;
  };
  readonly embeddings: readonly { readonly matrix: readonly (readonly number[])[]; readonly orbitSize: string }[];
}
const claimOf = (out: string) => (JSON.parse(out) as Certificate).claim;

describe('palmette answer', () => {
  it('answers from standard input and its certificate is verified', async () => {
    const ran = await palmette(['answer', '-'], question(a2, { dimension: 3 }));
    expect(ran.code).toBe(0);
    expect(claimOf(ran.out)).toMatchObject({
      verdict: 'embeds',
      dimension: 3,
      complete: true,
      orbits: '1',
      total: '48',
    });
    const checked = await palmette(['check', '-'], ran.out);
    expect(checked.code).toBe(0);
    expect(checked.out.trimEnd().split('\n').at(-1)).toMatch(/^VERIFIED /);
  });

  // P(3,5,−7): det 41, not a square; in Z^9 one orbit of 2^9·9! = 185,794,560 (each coordinate vector is met once: common practice)
  it('excludes P(3, 5, −7) at its rank by the determinant and lists its one way into rank + 1', async () => {
    const ran = await palmette(['answer', '--lines', '-'], `${question(p357)}\n${question(p357, { excess: 1 })}\n`);
    expect(ran.code).toBe(0);
    const [first, second] = ran.out.trimEnd().split('\n').map(claimOf);
    expect(first).toMatchObject({ verdict: 'excluded', ground: 'determinant', dimension: 8 });
    expect(second).toMatchObject({
      verdict: 'embeds',
      ground: 'exhaustion',
      dimension: 9,
      orbits: '1',
      total: '185794560',
    });
  });

  it.each([
    ['A_2 is least in Z^3', a2, { least: {} }, { verdict: 'embeds', dimension: 3, orbits: '1' }],
    [
      'E8 embeds in no Z^n (its dual minimum is 2; common practice)',
      e8,
      { any: true },
      { verdict: 'excluded', dimension: null, orbits: '0', total: '0' },
    ],
    ['E8 has no least n', e8, { least: {} }, { verdict: 'excluded', dimension: null }],
    [
      'a million zero columns cost nothing',
      a2,
      { dimension: 1_000_000 },
      { verdict: 'embeds', dimension: 1_000_000, orbits: '1' },
    ],
    ['rank 0', { kind: 'fraction', p: 1, q: 0 }, { dimension: 2 }, { verdict: 'embeds', orbits: '1', total: '1' }],
    [
      '17/5 in Z^4 fails at 2 and 17',
      { kind: 'fraction', p: 17, q: 5 },
      { dimension: 4 },
      { verdict: 'excluded', ground: 'hilbert' },
    ],
  ])('%s', async (_name, source, target, expected) => {
    const ran = await palmette(['answer', '-'], question(source, target));
    expect({ ...ran, out: '' }).toEqual({ code: 0, out: '', err: '' });
    expect(claimOf(ran.out)).toMatchObject(expected);
    const checked = await palmette(['check', '-'], ran.out);
    expect({ name: _name, code: checked.code, line: checked.out }).toMatchObject({ code: 0 });
  });

  it('forces a method and asks for a second opinion; refuses a method that cannot answer', async () => {
    const forced = await palmette(
      ['answer', '--method', 'columns', '--second-opinion', '-'],
      question(p357, { excess: 1 }),
    );
    expect(forced.code).toBe(0);
    const { question: asked, evidence } = JSON.parse(forced.out) as {
      question: object;
      evidence: { list: { method: string }; second: { method: string } };
    };
    expect(asked).toMatchObject({ method: 'columns', secondOpinion: true });
    expect([evidence.list.method, evidence.second.method].sort()).toEqual(['columns', 'rows']);
    const checked = await palmette(['check', '-'], forced.out);
    expect(checked.out).toMatch(
      /VERIFIED .*two methods agree: rows and columns|VERIFIED .*two methods agree: columns and rows/,
    );
    const cannot = await palmette(['answer', '--method', 'frames', '-'], question(p357, { excess: 5 }));
    expect([cannot.code, cannot.out]).toEqual([2, '']);
    expect(cannot.err).toMatch(/^Refused: \/method: .*frames need n = rank, rank \+ 1 or rank \+ 2/);
    const unknown = await palmette(['answer', '--method', 'guess', '-'], question(p357));
    expect([unknown.code, unknown.err.split('\n')[0]]).toEqual([
      2,
      '--method: expected rows, columns, frames, found guess',
    ]);
  });

  it('gives one witness at scope one', async () => {
    const ran = await palmette(['answer', '-'], question(p357, { excess: 2 }, { scope: 'one' }));
    expect(claimOf(ran.out)).toMatchObject({ verdict: 'embeds', ground: 'embedding', complete: false, dimension: 10 });
    expect((JSON.parse(ran.out) as Certificate).embeddings).toHaveLength(1);
    expect((await palmette(['check', '-'], ran.out)).code).toBe(0);
  });

  it('ends with 3 and an open certificate when the budget is spent', async () => {
    const hard = {
      kind: 'sum',
      of: [
        { kind: 'matrix', rows: [[40]] },
        { kind: 'matrix', rows: [[41]] },
        { kind: 'matrix', rows: [[42]] },
        { kind: 'matrix', rows: [[43]] },
        { kind: 'matrix', rows: [[44]] },
      ],
    };
    const ran = await palmette(['answer', '-'], question(hard, { dimension: 14 }, { budget: { cpuSeconds: 2 } }));
    expect(ran.code).toBe(3);
    expect(claimOf(ran.out.split('\n')[0]!)).toMatchObject({ verdict: 'open', ground: null, complete: false });
    expect((await palmette(['check', '-'], ran.out)).code).toBe(0);
  });

  // the columns of 30·I_5 and what is left of them at each depth are about 1.6 MB by the engine's count
  it.each([[], ['--lines']])(
    'ends with 3 and says the figure when a thread may not hold more memory %j',
    async (...more) => {
      const rows = Array.from({ length: 5 }, (_, i) => Array.from({ length: 5 }, (_, j) => (i === j ? 30 : 0)));
      const asked = question({ kind: 'matrix', rows }, { dimension: 12 }, { method: 'columns' });
      const ran = await palmette(['answer', ...more, '-'], asked, { MEMORY_MIB_PER_THREAD: '1' });
      expect(ran.code).toBe(3);
      expect(ran.err).toMatch(
        /open: a thread's bound of memory is used up \(2 MiB counted\); nothing can be concluded\n$/,
      );
      expect(claimOf(ran.out.split('\n')[0]!)).toMatchObject({ verdict: 'open', ground: null, complete: false });
      expect((await palmette(['check', '-'], ran.out)).code).toBe(0);
    },
  );

  it('writes a list of more than 10,000 in chunks, with the bytes that it has when it is held whole', async () => {
    const rows = Array.from({ length: 4 }, (_, i) => Array.from({ length: 4 }, (_, j) => (i === j ? 6 : 0)));
    const asked = question({ kind: 'matrix', rows }, { dimension: 16 }, { tests: ['pair', 'complement'] });
    const alone = answerAlone(asked);
    if (alone.kind === 'refused') throw new Error(alone.message);
    const whole = Buffer.concat(alone.certificate).toString();
    const ran = await palmette(['answer', '-'], asked);
    expect({ ...ran, out: ran.out === whole }).toEqual({ code: 0, out: true, err: '' });
    const head = JSON.parse(whole.split('\n', 1)[0]!) as {
      embeddings: { chunks: { records: number; bytes: number }[] };
    };
    expect(head.embeddings.chunks.length).toBeGreaterThan(3);
    expect(Math.max(...head.embeddings.chunks.map((chunk) => chunk.bytes))).toBeLessThanOrEqual(1024 * 1024);
  });

  it('refuses with one line: path, expectation, finding', async () => {
    const ran = await palmette(
      ['answer', '-'],
      question({
        kind: 'matrix',
        rows: [
          [2, 1],
          [0, 2],
        ],
      }),
    );
    expect(ran.code).toBe(2);
    expect(ran.out).toBe('');
    expect(ran.err.trimEnd().split('\n')).toHaveLength(1);
    expect(ran.err).toMatch(/^Refused: \/source\/rows/);
  });

  it('goes on after a refused line', async () => {
    const ran = await palmette(['answer', '--lines', '-'], `${question(a2)}\n{"no": 1}\n${question(a2)}`);
    const lines = ran.out.trimEnd().split('\n');
    expect(lines).toHaveLength(3);
    expect(JSON.parse(lines[1]!)).toMatchObject({ error: { code: 'shape', path: expect.any(String) } });
    expect(lines[0]).toBe(lines[2]);
    expect(ran.code).toBe(0);
  });

  it('reads gzip and files relative to the caller', async () => {
    writeFileSync(join(folder, 'a2.json.gz'), gzipSync(question(a2, { dimension: 3 })));
    expect((await palmette(['answer', 'a2.json.gz'])).code).toBe(0);
    expect(await palmette(['answer', 'nowhere.json'])).toMatchObject({ code: 2, out: '' });
    expect(await palmette(['answer'])).toMatchObject({ code: 2 });
    expect(await palmette(['prune'])).toMatchObject({ code: 2 });
  });
});

describe('palmette check', () => {
  it('rejects a certificate whose total was changed, and names no success', async () => {
    const { out } = await palmette(['answer', '-'], question(a2, { dimension: 3 }));
    const ran = await palmette(['check', '-'], out.replace('"total":"48"', '"total":"49"'));
    expect(ran.code).not.toBe(0);
    expect(ran.out.trimEnd().split('\n').at(-1)).toMatch(/^REJECTED /);
  });

  it('cannot read what is no certificate', async () => {
    const ran = await palmette(['check', '-'], 'not a certificate');
    expect([1, 2]).toContain(ran.code);
    expect(ran.out).toMatch(/^(REJECTED|NOT CHECKED) /m);
  });
});
