/**
 * Existence and number of embeddings against a general-purpose solver (Z3, integer arithmetic): every model of
 * A·Aᵀ = Q is enumerated and blocked, with no symmetry in the encoding, and compared with the certificate's total.
 */
import { init, type Arith } from 'z3-solver';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { answerAlone } from '@palmette/threads';

type Solve = (gram: readonly (readonly number[])[], n: number) => Promise<number>;
let countModels: Solve;
let close: () => void;

beforeAll(async () => {
  const { Context, em } = await init();
  const z3 = Context('oracle');
  close = () => em.PThread.terminateAllThreads();
  countModels = async (gram, n) => {
    const solver = new z3.Solver();
    const entries = gram.map((row, i) =>
      Array.from({ length: n }, (_, j) => {
        const x = z3.Int.const(`a_${i}_${j}`);
        const bound = Math.floor(Math.sqrt(row[i]!));
        solver.add(x.ge(-bound), x.le(bound));
        return x;
      }),
    );
    for (let i = 0; i < gram.length; i += 1) {
      for (let k = 0; k <= i; k += 1) {
        const terms = entries[i]!.map((x, j): Arith<'oracle'> => x.mul(entries[k]![j]!));
        solver.add(terms.reduce((sum, term) => sum.add(term)).eq(gram[i]![k]!));
      }
    }
    let models = 0;
    while ((await solver.check()) === 'sat') {
      const model = solver.model();
      models += 1;
      solver.add(z3.Or(...entries.flat().map((x) => x.neq(model.eval(x, true) as Arith<'oracle'>))));
    }
    return models;
  };
}, 60_000);
afterAll(() => close());

function totalOf(rows: readonly (readonly number[])[], n: number): { verdict: string; total: number } {
  const end = answerAlone(
    JSON.stringify({
      format: 'palmette.question/1',
      source: { kind: 'matrix', rows },
      target: { dimension: n },
      scope: 'all',
    }),
  );
  if (end.kind !== 'answer' || !end.settled) throw new Error(`not settled: ${JSON.stringify(rows)} in Z^${n}`);
  const { claim } = JSON.parse(Buffer.concat([...end.certificate]).toString()) as {
    claim: { verdict: string; total: string };
  };
  return { verdict: claim.verdict, total: Number(claim.total) };
}

/** A small generator with a fixed seed (Park–Miller), so that a failing case can be named. */
function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state * 48271) % 2147483647;
    return state % below;
  };
}

/** Rows of a Gram matrix B·Bᵀ or of a small form near it, positive definite by construction. */
function smallLattices(): { rows: number[][]; n: number }[] {
  const next = sequence(20261201);
  const cases: { rows: number[][]; n: number }[] = [];
  while (cases.length < 14) {
    const rank = 2 + next(2);
    const b = Array.from({ length: rank }, () => Array.from({ length: rank + 1 }, () => next(3) - 1));
    const rows = b.map((x) => b.map((y) => x.reduce((sum, v, k) => sum + v * y[k]!, 0)));
    if (cases.length % 2 === 1) rows[0]![0]! += 1;
    if (
      determinant(rows) > 0 &&
      rows.every((row, i) => row[i]! > 0 && row[i]! <= 4) &&
      rows[0]![0]! * rows[1]![1]! > rows[0]![1]! ** 2
    ) {
      cases.push({ rows, n: rank + (cases.length % 3 === 0 ? 1 : 0) });
    }
  }
  return cases;
}

function determinant(m: readonly (readonly number[])[]): number {
  if (m.length === 1) return m[0]![0]!;
  return m[0]!.reduce(
    (sum, x, j) => sum + (j % 2 === 0 ? x : -x) * determinant(m.slice(1).map((row) => row.filter((_, k) => k !== j))),
    0,
  );
}

describe('engine against a general-purpose solver', () => {
  it.each(smallLattices())('$rows in Z^$n', async ({ rows, n }) => {
    const models = await countModels(rows, n);
    const ours = totalOf(rows, n);
    expect({ rows, n, ...ours }).toEqual({ rows, n, verdict: models > 0 ? 'embeds' : 'excluded', total: models });
  });
});
