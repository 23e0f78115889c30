/**
 * The quick look: arithmetic first, then a search that ends after 200 ms of listing or 10^5 nodes, whichever comes
 * first. What it says is not certified and nothing of it is kept.
 */
import type { Target } from '@palmette/contracts';
import { reducedBasis, type ColumnGround, type Lattice } from '@palmette/lattice';
import {
  choosePlan,
  embeddingMatrix,
  nextStep,
  type Basis,
  type FoundOrbit,
  type Plan,
  type StageResult,
} from '@palmette/search';
import { groundsOf } from './preview-grounds.ts';
import type { ArithmeticReading, DimensionGround, PreviewOrder, QuickLook } from './preview-messages.ts';
import { secondsLeast, tryMethods, type Trial } from './preview-trials.ts';

const LISTING_MS = 200;
const LISTING_NODES = 100_000n;
/** Choosing a plan takes longer than a look beyond this rank. */
const QUICK_RANK = 120;
/** The same question gets the same plan; a look needs no more of its seed. */
const SEED = 1;
/** Above the rank by more than this, arithmetic has no condition (FORMAT.md, section 7). */
const LAST_EXCESS = 2;

export function arithmeticReading(lattice: Lattice, target: Target, ground = groundsOf(lattice)): ArithmeticReading {
  const nowhere = ground(null) as ColumnGround | null;
  const settled = (excluded: DimensionGround[]) => ({ excluded, nowhere, settled: true, next: null });
  const open = (excluded: DimensionGround[], next: number | null) => ({ excluded, nowhere, settled: false, next });
  if (!('least' in target) && !('any' in target)) {
    const n = 'dimension' in target ? target.dimension : lattice.rank + target.excess;
    const found = ground(n);
    return found === null ? open([], n) : settled([{ dimension: n, ground: found }]);
  }
  if (nowhere !== null) return settled([{ dimension: null, ground: nowhere }]);
  if ('any' in target) return open([], null);
  const upTo = target.least.upTo ?? Infinity;
  if (upTo < lattice.rank) return settled([{ dimension: upTo, ground: { ground: 'dimension' } }]);
  const excluded: DimensionGround[] = [];
  for (let n = lattice.rank; n <= Math.min(upTo, lattice.rank + LAST_EXCESS); n += 1) {
    const found = ground(n);
    if (found === null) return open(excluded, n);
    excluded.push({ dimension: n, ground: found });
  }
  const next = lattice.rank + LAST_EXCESS + 1;
  return next <= upTo ? open(excluded, next) : settled(excluded);
}

type First = NonNullable<Extract<QuickLook, { readonly kind: 'done' }>['first']>;

/** @param now milliseconds, for the bound of the listing */
export function quickLook(
  lattice: Lattice,
  order: PreviewOrder,
  now: () => number,
  arithmetic = groundsOf(lattice),
): QuickLook {
  if (lattice.rank > QUICK_RANK)
    return { kind: 'none', why: `Rank ${lattice.rank} is too much for a quick look in the browser.` };
  const reduced = reducedBasis(lattice);
  const plan = choosePlan({ gram: reduced.gram, target: order.target, scope: order.scope, seed: SEED }, arithmetic);
  const results: StageResult[] = [];
  const began = now();
  let first: First | null = null;
  let nodes = 0n;
  for (;;) {
    const step = nextStep(plan, results, arithmetic);
    if ('conclusion' in step) {
      const { verdict, dimension, listComplete } = step.conclusion;
      return {
        kind: 'done',
        verdict,
        dimension,
        complete: listComplete,
        orbits: results.at(-1)?.orbits ?? '0',
        nodes: nodes.toString(),
        ms: now() - began,
        first: verdict === 'embeds' ? first : null,
      };
    }
    const left = { ms: LISTING_MS - (now() - began), nodes: LISTING_NODES - nodes };
    const trials = tryMethods(plan, step.stage, left, now);
    const [trial] = trials as [Trial, ...Trial[]];
    nodes = trials.reduce((sum, one) => sum + one.nodes, nodes);
    const found = trials.find((one) => one.first !== null)?.first ?? null;
    first = found === null ? null : placed(plan, found, reduced.basis);
    if (trial.end === 'more') {
      return {
        kind: 'unfinished',
        dimension: 'any' in order.target ? null : step.stage.dimension,
        orbits: trials.reduce((most, { orbits }) => (orbits > most ? orbits : most), 0n).toString(),
        nodes: nodes.toString(),
        ms: now() - began,
        seconds: secondsLeast(plan, trials, SEED),
        tried: trials.map(({ stage }) => stage.method),
        first,
      };
    }
    results.push({
      ...trial.stage,
      complete: trial.end === 'done',
      nodes: trial.nodes.toString(),
      orbits: trial.orbits.toString(),
    });
  }
}

/** In the rows of the source; zero columns are counted. */
function placed(plan: Plan, found: FoundOrbit, radical: Basis | null): First {
  const { rows, zeros } = embeddingMatrix(plan, found, radical);
  return { matrix: rows.map((row) => row.map(String)), zeroColumns: zeros };
}
