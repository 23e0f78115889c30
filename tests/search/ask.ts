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
  chooseMethod,
  choosePlan,
  embeddingMatrix,
  nextStep,
  openRun,
  orbitSize,
  type Conclusion,
  type FoundOrbit,
  type Method,
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

export interface AskOptions {
  /** False: even what arithmetic excludes is searched. */
  readonly arithmetic?: boolean;
  readonly scope?: 'one' | 'all';
  /** Forces one; left out, the chooser chooses. */
  readonly method?: Method;
  readonly secondOpinion?: boolean;
}

export function ask(source: Source, target: Target, options: AskOptions = {}): Found {
  return askLattice(buildLattice(source), target, options);
}

const SEED = 20261201;

export function askLattice(lattice: Lattice, target: Target, options: AskOptions = {}): Found {
  const reduced = reducedBasis(lattice);
  const arithmetic = (n: number | null) =>
    n === null || (options.arithmetic === false && n >= lattice.rank) ? null : arithmeticGround(lattice, n);
  const plan = choosePlan(
    {
      gram: reduced.gram,
      target,
      scope: options.scope ?? 'all',
      forced: options.method ?? null,
      secondOpinion: options.secondOpinion ?? false,
      seed: SEED,
    },
    arithmetic,
  );
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
    const { stage } = chooseMethod(plan, step.stage, SEED);
    const run = openRun(plan, stage, { from: [], to: null });
    let end = run.advance(100_000);
    while (end === 'more') end = run.advance(100_000);
    nodes += run.nodes;
    results.push({
      ...stage,
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
