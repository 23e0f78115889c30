/**
 * The quick look: arithmetic first, then a search that ends after 200 ms of listing or 10^5 nodes, whichever comes
 * first. What it says is not certified and nothing of it is kept.
 */
import type { Target } from '@palmette/contracts';
import { reducedBasis, type ColumnGround, type Lattice } from '@palmette/lattice';
import {
  choosePlan,
  embeddingMatrix,
  estimate,
  nextStep,
  openRun,
  type Plan,
  type StageResult,
} from '@palmette/search';
import { groundsOf } from './preview-grounds.ts';
import type { ArithmeticReading, DimensionGround, PreviewOrder, QuickLook } from './preview-messages.ts';

const LISTING_MS = 200;
const LISTING_NODES = 100_000n;
/** Nodes between two looks at the clock. */
const SLICE = 500;
/** Choosing a plan takes longer than a look beyond this rank. */
const QUICK_RANK = 120;
/** Probes of the estimate, and the listing steps that all of them may take. */
const PROBES = 40;
const PROBE_STEPS = 300_000;
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
  let first: { matrix: string[][]; zeroColumns: number } | null = null;
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
    const { stage } = step;
    const run = openRun(plan, stage, { from: [], to: null });
    let state = run.advance(SLICE);
    first = firstOf(plan, run.takeFound(), reduced.basis, first);
    while (state === 'more' && now() - began < LISTING_MS && nodes + run.nodes < LISTING_NODES) {
      state = run.advance(SLICE);
      first = firstOf(plan, run.takeFound(), reduced.basis, first);
    }
    nodes += run.nodes;
    if (state === 'more') {
      const ms = now() - began;
      return {
        kind: 'unfinished',
        dimension: 'any' in order.target ? null : stage.dimension,
        orbits: run.orbits.toString(),
        nodes: nodes.toString(),
        ms,
        seconds: secondsOf(plan, stage, nodes, ms),
        first,
      };
    }
    results.push({ ...stage, complete: state === 'done', nodes: run.nodes.toString(), orbits: run.orbits.toString() });
    if (run.orbits === 0n) first = null;
  }
}

type Step = Extract<ReturnType<typeof nextStep>, { readonly stage: unknown }>;

/** The estimate of the tree at the rate that was just seen. */
function secondsOf(plan: Plan, stage: Step['stage'], nodes: bigint, ms: number) {
  const { mean, low, high } = estimate(plan, stage, { probes: PROBES, seed: SEED, steps: PROBE_STEPS });
  const rate = (Number(nodes) / Math.max(1, ms)) * 1000;
  // fewer nodes than were listed already: the probes missed most of the tree
  if (!Number.isFinite(high) || rate <= 0 || mean <= Number(nodes)) return null;
  const least = Math.max(low, Number(nodes));
  return { low: least / rate, likely: Math.max(mean, least) / rate, high: Math.max(high, least) / rate };
}

function firstOf(
  plan: Plan,
  found: Parameters<typeof embeddingMatrix>[1][],
  radical: Parameters<typeof embeddingMatrix>[2],
  before: { matrix: string[][]; zeroColumns: number } | null,
): { matrix: string[][]; zeroColumns: number } | null {
  const [orbit] = found;
  if (before !== null || orbit === undefined) return before;
  const { rows, zeros } = embeddingMatrix(plan, orbit, radical);
  return { matrix: rows.map((row) => row.map(String)), zeroColumns: zeros };
}
