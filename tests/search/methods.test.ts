/** Three methods, one answer: rows, frames and columns list the same set of orbits; scrambling the basis never changes it. */
import { describe, expect, it } from 'vitest';
import { determinant, multiply, transpose, type BigMatrix } from '@palmette/exact';
import { buildLattice, reducedBasis, type Lattice, type Source } from '@palmette/lattice';
import { choosePlan, MethodsDisagree, nextStep, type Method } from '@palmette/search';
import { askLattice, factorial, matrix, typed, type Found, type Target } from './ask.ts';

/** Park–Miller with a fixed seed. */
function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => (state = (state * 48271) % 2147483647) % below;
}
type Next = (below: number) => number;

const rowsOf = (m: BigMatrix) => m.map((row) => row.map(String));

function said({ set, orbits, total, conclusion }: Found) {
  return { orbits: [...set].sort(), number: orbits, total, verdict: conclusion.verdict, n: conclusion.dimension };
}

/** All methods that apply; the input stands in the message of a failure. */
function agree(lattice: Lattice, target: Target, note: unknown): Found {
  const n = 'dimension' in target ? target.dimension : Infinity;
  const methods: Method[] = n - lattice.rank <= 2 ? ['rows', 'frames', 'columns'] : ['rows', 'columns'];
  const [rows, ...others] = methods.map((method) => askLattice(lattice, target, { arithmetic: false, method }));
  const gram = rowsOf(lattice.gram.map((row) => [...row]));
  others.forEach((found, i) =>
    expect({ gram, target, note, by: methods[i + 1], ...said(found) }).toEqual({
      gram,
      target,
      note,
      by: methods[i + 1],
      ...said(rows!),
    }),
  );
  return rows!;
}

function unimodular(next: Next, size: number): BigMatrix {
  const u: BigMatrix = Array.from({ length: size }, (_, i) =>
    Array.from({ length: size }, (_, j) => (i === j ? 1n : 0n)),
  );
  for (let k = 0; k < 2 * size && size > 1; k += 1) {
    const i = next(size);
    const j = (i + 1 + next(size - 1)) % size;
    const factor = BigInt(next(3) - 1);
    u[i] = u[i]!.map((x, c) => x + factor * u[j]![c]!);
  }
  return u;
}

/** B·Bᵀ with entries up to 2, of the rank asked for or lower if `semidefinite`. */
function gramOf(next: Next, rank: number, width: number, semidefinite = false): BigMatrix {
  for (;;) {
    const b = Array.from({ length: rank }, () => Array.from({ length: width }, () => BigInt(next(5) - 2)));
    const gram = multiply(b, transpose(b));
    const zero = gram.every((row) => row.every((x) => x === 0n));
    if (semidefinite ? !zero : determinant(gram) !== 0n && gram.every((row, i) => row[i]! < 16n)) return gram;
  }
}

function tree(next: Next, size: number): Source {
  const vertices = Array.from({ length: size }, (_, i) => ({ name: `v${i}`, weight: -2 - next(3) }));
  const edges = vertices.slice(1).map((_, i): [string, string] => [`v${next(i + 1)}`, `v${i + 1}`]);
  return { kind: 'tree', vertices, edges };
}

/** A random tree can be indefinite: then it is no lattice of ours. */
function definite(source: Source): Lattice | null {
  try {
    return buildLattice(source);
  } catch {
    return null;
  }
}

describe('three methods, one answer', () => {
  it('700 forms B·Bᵀ, n = r … r + 3', () => {
    const next = sequence(41);
    for (let k = 0; k < 700; k += 1) {
      const rank = 1 + next(5);
      const n = rank + next(rank < 4 ? 4 : 3);
      agree(buildLattice(matrix(rowsOf(gramOf(next, rank, rank + next(3))))), { dimension: n }, k);
    }
  });

  it('400 trees, stars and chains, n = r … r + 3', () => {
    const next = sequence(42);
    for (let done = 0; done < 400;) {
      const size = 2 + next(8);
      const lattice = definite(tree(next, size));
      if (lattice === null) continue;
      agree(lattice, { dimension: lattice.rank + next(4) }, done);
      done += 1;
    }
  });

  it('200 scrambled forms: the set of the plain basis, moved along', () => {
    const next = sequence(43);
    for (let k = 0; k < 200; k += 1) {
      const rank = 2 + next(4);
      const gram = gramOf(next, rank, rank + next(2));
      const u = unimodular(next, rank);
      const n = rank + next(3);
      const plain = agree(buildLattice(matrix(rowsOf(gram))), { dimension: n }, k);
      const scrambled = agree(
        buildLattice(matrix(rowsOf(multiply(u, multiply(gram, transpose(u)))))),
        { dimension: n },
        rowsOf(u),
      );
      const moved = [...plain.set].map((text) => canonical(multiply(u, parse(text)))).sort();
      expect({ gram: rowsOf(gram), u: rowsOf(u), n, set: [...scrambled.set].sort() }).toEqual({
        gram: rowsOf(gram),
        u: rowsOf(u),
        n,
        set: moved,
      });
    }
  });

  it('100 semidefinite forms', () => {
    const next = sequence(44);
    for (let k = 0; k < 100; k += 1) {
      const size = 2 + next(3);
      const lattice = buildLattice(matrix(rowsOf(gramOf(next, size, Math.max(1, size - 1), true))));
      agree(lattice, { dimension: lattice.rank + next(3) }, k);
    }
  });

  it.each(['A2 + A2', 'A3 + A1', 'D4', 'D5', 'A4', 'E6', 'A2 + 2', 'A5'].map((text) => [text]))('%s', (text) => {
    const lattice = buildLattice(sumOf(text));
    for (let excess = 0; excess <= 3; excess += 1) agree(lattice, { dimension: lattice.rank + excess }, text);
  });

  it('any n: rows at the trace and columns, 200 forms; least n by all', () => {
    const next = sequence(45);
    for (let k = 0; k < 200; k += 1) {
      const rank = 1 + next(3);
      const gram = gramOf(next, rank, rank + next(2));
      if (gram.reduce((sum, row, i) => sum + row[i]!, 0n) > 16n) continue;
      const lattice = buildLattice(matrix(rowsOf(gram)));
      agree(lattice, { any: true }, k);
      agree(lattice, { least: {} }, k);
    }
  });

  it('a disagreement is an error that names both results', () => {
    const lattice = buildLattice(typed('18/5'));
    const plan = choosePlan(
      { gram: reducedBasis(lattice).gram, target: { dimension: 4 }, scope: 'all', secondOpinion: true, seed: 1 },
      () => null,
    );
    const first = {
      no: 0,
      dimension: 4,
      purpose: 'all',
      whole: false,
      method: 'rows',
      why: '',
      complete: true,
    } as const;
    const results = [{ ...first, nodes: '9', orbits: '2', set: 'a' }];
    const step = nextStep(plan, results, () => null);
    if (!('stage' in step)) throw new Error('expected a second stage');
    expect(step.stage).toMatchObject({ method: 'frames', repeats: 0, dimension: 4 });
    const second = { ...step.stage, complete: true, nodes: '3' };
    expect(() => nextStep(plan, [...results, { ...second, orbits: '1', set: 'a' }], () => null)).toThrow(
      MethodsDisagree,
    );
    expect(() => nextStep(plan, [...results, { ...second, orbits: '2', set: 'b' }], () => null)).toThrow(
      /two methods disagree at n = 4: rows list 2 orbits .*, frames list 2 orbits/,
    );
  });

  it('a second opinion agrees and is recorded', () => {
    const found = askLattice(buildLattice(typed('18/5')), { dimension: 4 }, { secondOpinion: true });
    expect(found.conclusion).toMatchObject({ verdict: 'embeds', secondStage: 0, listStage: 1 });
    expect(found.orbits).toBe(2);
  });
});

describe('hard cases', () => {
  it('√2·E8 in Z^8: 2,025 orbits, 30·|W(E8)| = 20,901,888,000 in all (Conway–Sloane, Sphere Packings, ch. 4 and 16)', () => {
    const doubled = buildLattice(typed('E8')).gram.map((row) => row.map((x) => String(2n * x)));
    const found = askLattice(buildLattice(matrix(doubled)), { dimension: 8 }, { arithmetic: false });
    expect([found.orbits, found.total]).toEqual([2025, 30n * 696_729_600n]);
  });

  it('⟨2^31⟩ in Z^4: 24 embeddings (Jacobi)', () => {
    const found = askLattice(buildLattice(matrix([[String(2n ** 31n)]])), { dimension: 4 });
    expect(found.total).toBe(24n);
  });

  it('A_2 in a basis with entries of 10^18 in Z^3: one orbit of 48', () => {
    const k = 10n ** 9n;
    const u = [
      [1n, k],
      [0n, 1n],
    ];
    const gram = multiply(
      u,
      multiply(
        [
          [2n, -1n],
          [-1n, 2n],
        ],
        transpose(u),
      ),
    );
    const found = askLattice(buildLattice(matrix(rowsOf(gram))), { dimension: 3 });
    expect([found.orbits, found.total]).toEqual([1, 48n]);
  });

  it('I_30 in Z^30: one orbit of 2^30·30!', () => {
    const identity = Array.from({ length: 30 }, (_, i) => Array.from({ length: 30 }, (_, j) => (i === j ? 1 : 0)));
    const found = askLattice(buildLattice(matrix(identity)), { dimension: 30 });
    expect([found.orbits, found.total]).toEqual([1, 2n ** 30n * factorial(30)]);
  });

  it('A_200 in Z^201: one orbit of 2^201·201!', () => {
    const found = askLattice(buildLattice(typed('A200')), { dimension: 201 });
    expect([found.orbits, found.total]).toEqual([1, 2n ** 201n * factorial(201)]);
  });
});

function sumOf(text: string): Source {
  const parts = text.split(' + ');
  return parts.length === 1
    ? typed(text)
    : { kind: 'sum', of: parts.map((p): Source => (/^\d+$/.test(p) ? matrix([[-Number(p)]]) : typed(p))) };
}

const parse = (text: string): BigMatrix => text.split(';').map((row) => (row === '' ? [] : row.split(' ').map(BigInt)));

/** The spelling of FORMAT.md, section 6: positive leads, columns descending. */
function canonical(rows: BigMatrix): string {
  const columns = transpose(rows)
    .filter((column) => column.some((x) => x !== 0n))
    .map((column) => (column.find((x) => x !== 0n)! < 0n ? column.map((x) => -x) : column))
    .sort((a, b) => {
      const i = a.findIndex((x, j) => x !== b[j]);
      return i < 0 ? 0 : a[i]! > b[i]! ? -1 : 1;
    });
  return rows.map((_, i) => columns.map((column) => column[i]).join(' ')).join(';');
}
