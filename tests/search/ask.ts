/** Questions to the engine without files: lattice in, orbits out, as sets that do not depend on any order. */
import {
  arithmeticGround,
  buildLattice,
  readSourceText,
  reducedBasis,
  type Lattice,
  type Source,
} from '@palmette/lattice';
import {
  choosePlan,
  embeddingMatrix,
  nextStep,
  openRun,
  orbitSize,
  type Conclusion,
  type FoundOrbit,
  type Plan,
  type StageResult,
} from '@palmette/search';

export type Target = Plan['target'];

export interface Found {
  readonly conclusion: Conclusion;
  readonly nodes: bigint;
  readonly orbits: number;
  readonly total: bigint;
  /** Canonical text of each orbit in the basis of the source. */
  readonly set: ReadonlySet<string>;
}

export const matrix = (rows: readonly (readonly (number | string)[])[]): Source => ({ kind: 'matrix', rows });
export const typed = (text: string): Source => readSourceText(text);

/** @param arithmetic false: even what arithmetic excludes is searched */
export function ask(
  source: Source,
  target: Target,
  options: { readonly arithmetic?: boolean; readonly scope?: 'one' | 'all' } = {},
): Found {
  return askLattice(buildLattice(source), target, options);
}

export function askLattice(
  lattice: Lattice,
  target: Target,
  options: { readonly arithmetic?: boolean; readonly scope?: 'one' | 'all' } = {},
): Found {
  const reduced = reducedBasis(lattice);
  const arithmetic = (n: number) =>
    options.arithmetic === false && n >= lattice.rank ? null : arithmeticGround(lattice, n);
  const plan = choosePlan({ gram: reduced.gram, target, scope: options.scope ?? 'all', seed: 20261201 }, arithmetic);
  const results: StageResult[] = [];
  const found = new Map<number, FoundOrbit[]>();
  let nodes = 0n;
  for (;;) {
    const step = nextStep(plan, results, arithmetic);
    if ('conclusion' in step) {
      const { conclusion } = step;
      const list = found.get(conclusion.listStage ?? -1) ?? [];
      const width = results.find((r) => r.no === conclusion.listStage)?.dimension ?? 0;
      return {
        conclusion,
        nodes,
        orbits: list.length,
        total: list.reduce((sum, orbit) => sum + orbitSize(orbit, width), 0n),
        set: new Set(
          list.map((orbit) =>
            embeddingMatrix(plan, orbit, reduced.basis)
              .rows.map((row) => row.join(' '))
              .join(';'),
          ),
        ),
      };
    }
    const run = openRun(plan, step.stage, { from: [], to: null });
    let end = run.advance(100_000);
    while (end === 'more') end = run.advance(100_000);
    nodes += run.nodes;
    results.push({
      ...step.stage,
      complete: end === 'done',
      nodes: run.nodes.toString(),
      orbits: run.orbits.toString(),
    });
    found.set(step.stage.no, run.takeFound());
  }
}

export function factorial(n: number): bigint {
  let out = 1n;
  for (let k = 2; k <= n; k += 1) out *= BigInt(k);
  return out;
}

/** n! / (n − k)! */
export function falling(n: number, k: number): bigint {
  return k > n ? 0n : factorial(n) / factorial(n - k);
}
