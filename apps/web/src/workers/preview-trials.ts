/**
 * The runs of a quick look: rows for half of what is left of its bounds, then, if they did not end, frames or columns for the
 * other half where their list of columns is short. The engine tries for longer and by more than this; a look is only a look.
 */
import { listAdmissibleColumns } from '@palmette/lattice';
import { estimate, openRun, whyNot, type FoundOrbit, type Method, type Plan, type Stage } from '@palmette/search';

export interface Bounds {
  /** Milliseconds that are left, by the clock of the look. */
  readonly ms: number;
  readonly nodes: bigint;
}

export interface Trial {
  readonly stage: Stage;
  readonly end: 'more' | 'done' | 'found';
  readonly nodes: bigint;
  readonly orbits: bigint;
  readonly first: FoundOrbit | null;
  readonly ms: number;
}

/** Nodes between two looks at the clock. */
const SLICE = 500;
/** Another method is opened only if its columns are so few, found by so many steps: milliseconds. */
const OTHER_COLUMNS = 1_000;
const OTHER_STEPS = 20_000;
const OTHER_RANK = 60;
/** Probes of the estimate, and the listing steps that all of them may take. */
const PROBES = 40;
const PROBE_STEPS = 300_000;

/** @returns all trials; if one ended it comes first */
export function tryMethods(plan: Plan, stage: Stage, bounds: Bounds, now: () => number): readonly Trial[] {
  const rows = run(plan, { ...stage, method: 'rows' }, { ms: bounds.ms / 2, nodes: bounds.nodes / 2n }, now);
  if (rows.end !== 'more') return [rows];
  const method = otherMethod(plan, stage);
  if (method === null) return [rows];
  const other = run(plan, { ...stage, method }, { ms: bounds.ms - rows.ms, nodes: bounds.nodes - rows.nodes }, now);
  return other.end === 'more' ? [rows, other] : [other, rows];
}

function run(plan: Plan, stage: Stage, bounds: Bounds, now: () => number): Trial {
  const began = now();
  const open = openRun(plan, stage, { from: [], to: null });
  let first: FoundOrbit | null = null;
  for (;;) {
    const end = open.advance(SLICE);
    first ??= open.takeFound()[0] ?? null;
    const ms = now() - began;
    if (end !== 'more' || ms >= bounds.ms || open.nodes >= bounds.nodes)
      return { stage, end, nodes: open.nodes, orbits: open.orbits, first, ms };
  }
}

/** Frames near the rank, columns above, if what they are built from is listed in a moment. */
function otherMethod(plan: Plan, stage: Stage): Method | null {
  const rank = plan.order.length;
  if (rank === 0 || rank > OTHER_RANK || !('rows' in plan.gram)) return null;
  const excess = stage.dimension - rank;
  const method = !stage.whole && excess <= 2 ? 'frames' : 'columns';
  if (whyNot(method, plan, stage.dimension, stage.whole) !== null) return null;
  const gram = plan.gram.rows.map((row) => row.map(BigInt));
  let columns = 0;
  const end = listAdmissibleColumns(
    gram,
    { unitOnly: excess === 0, maxSteps: OTHER_STEPS },
    () => (columns += 1) > OTHER_COLUMNS,
  );
  return end === 'listed' ? method : null;
}

export interface Seconds {
  readonly low: number;
  readonly likely: number;
  readonly high: number;
}

/** The shortest estimate of the whole, each at the rate that was just seen; null where nothing sensible can be said. */
export function secondsLeast(plan: Plan, trials: readonly Trial[], seed: number): Seconds | null {
  const known = trials.flatMap((trial) => secondsOf(plan, trial, seed) ?? []);
  return known.sort((a, b) => a.likely - b.likely)[0] ?? null;
}

function secondsOf(plan: Plan, { stage, nodes, ms }: Trial, seed: number): Seconds | null {
  const { mean, low, high } = estimate(plan, stage, { probes: PROBES, seed, steps: PROBE_STEPS });
  const rate = (Number(nodes) / Math.max(1, ms)) * 1000;
  // fewer nodes than were listed already: the probes missed most of the tree
  if (!Number.isFinite(high) || rate <= 0 || mean <= Number(nodes)) return null;
  const least = Math.max(low, Number(nodes));
  return { low: least / rate, likely: Math.max(mean, least) / rate, high: Math.max(high, least) / rate };
}
