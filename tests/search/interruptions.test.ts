/** Any number of interruptions, cuts and resumptions gives the same orbits in the same order and the same counters. */
import { describe, expect, it } from 'vitest';
import { buildLattice, readSourceText, reducedBasis } from '@palmette/lattice';
import {
  choosePlan,
  cover,
  estimate,
  nextStep,
  openRun,
  type Interval,
  type Method,
  type Plan,
  type Stage,
} from '@palmette/search';

function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state * 48271) % 2147483647;
    return state % below;
  };
}

const CASES: readonly (readonly [string, number, Method | 'fewest'])[] = [
  ['[5, 5, 5, 5, 5]', 2, 'rows'],
  ['[4, 3, 5, 3, 4, 3]', 2, 'rows'],
  ['D4', 2, 'rows'],
  ['6 1 2; 1 7 3; 2 3 8', 3, 'rows'],
  ['A7', 2, 'rows'],
  ['P(3, 3, -15)', 2, 'rows'],
  ['10', 6, 'rows'],
  ['[4, 3, 5, 3, 4, 3]', 2, 'fewest'],
  ['6 1 2; 1 7 3; 2 3 8', 3, 'fewest'],
  // more than 64 columns: listed without the projection bound
  ['A40', 30, 'rows'],
  ['8 0 0 0; 0 8 0 0; 0 0 8 0; 0 0 0 8', 0, 'frames'],
  ['4 0 0 0; 0 4 0 0; 0 0 4 0; 0 0 0 4', 1, 'frames'],
  ['[5, 5, 5, 5, 5]', 2, 'frames'],
  ['6 1 2; 1 7 3; 2 3 8', 2, 'frames'],
  ['6 1 2; 1 7 3; 2 3 8', 3, 'columns'],
  ['[4, 3, 5, 3, 4, 3]', 2, 'columns'],
  ['4 0 0; 0 4 0; 0 0 4', 4, 'columns'],
];

function problem(text: string, excess: number, method: Method | 'fewest'): { plan: Plan; stage: Stage } {
  const { gram } = reducedBasis(buildLattice(text === '10' ? { kind: 'matrix', rows: [[10]] } : readSourceText(text)));
  const plan = choosePlan(
    { gram, target: { excess }, scope: 'all', forced: method === 'fewest' ? 'rows' : method, seed: 3 },
    () => null,
  );
  const step = nextStep(plan, [], () => null);
  if (!('stage' in step)) throw new Error('expected a stage');
  return { plan, stage: method === 'fewest' ? { ...step.stage, fewest: true } : step.stage };
}

interface Piece extends Interval {
  readonly checkpoint?: string;
  readonly found: readonly string[];
}

function whole(plan: Plan, stage: Stage): { found: string[]; nodes: bigint; orbits: bigint } {
  const run = openRun(plan, stage, { from: [], to: null });
  while (run.advance(1_000_000) !== 'done');
  return { found: run.takeFound().map((o) => JSON.stringify(o)), nodes: run.nodes, orbits: run.orbits };
}

describe.each(CASES)('%s, excess %i, %s', (text, excess, method) => {
  const { plan, stage } = problem(text, excess, method);
  const expected = whole(plan, stage);

  it('interrupted and cut at random', () => {
    for (let seed = 1; seed <= 12; seed += 1) {
      const next = sequence(seed * 7919);
      const waiting: Piece[] = cover(plan, stage, 1 + next(9)).map((p) => ({ from: p.from, to: p.to, found: [] }));
      const done: { from: readonly number[]; found: readonly string[]; nodes: bigint; orbits: bigint }[] = [];
      while (waiting.length > 0) {
        const piece = waiting.splice(next(waiting.length), 1)[0]!;
        let { to } = piece;
        const run = openRun(plan, stage, piece, piece.checkpoint);
        const end = run.advance(Number(expected.nodes) / (4 + next(40)));
        const found = [...piece.found, ...run.takeFound().map((o) => JSON.stringify(o))];
        if (end === 'more' && next(3) === 0) {
          const offer = run.giveAway();
          if (offer !== null) {
            expect(offer.shareKept >= 0 && offer.shareKept <= 1).toBe(true);
            run.shorten(offer.mid);
            waiting.push({ from: offer.mid, to, found: [] });
            to = offer.mid;
          }
        }
        if (end === 'more') waiting.push({ from: piece.from, to, checkpoint: run.checkpoint(), found });
        else done.push({ from: piece.from, found, nodes: run.nodes, orbits: run.orbits });
      }
      done.sort((a, b) => compare(a.from, b.from));
      expect({ seed, found: done.flatMap((d) => d.found) }).toEqual({ seed, found: expected.found });
      expect(done.reduce((sum, d) => sum + d.nodes, 0n)).toBe(expected.nodes);
      expect(done.reduce((sum, d) => sum + d.orbits, 0n)).toBe(expected.orbits);
    }
  });

  it('a cover abuts from the root to the end and its shares add up to 1', () => {
    const pieces = cover(plan, stage, 24);
    expect(pieces[0]!.from).toEqual([]);
    expect(pieces.at(-1)!.to).toBeNull();
    pieces.slice(1).forEach((p, i) => expect(p.from).toEqual(pieces[i]!.to));
    expect(pieces.reduce((sum, p) => sum + p.share, 0)).toBeCloseTo(1, 9);
  });

  it('the estimate is unbiased enough to be within a factor of three, with its spread around it', () => {
    const e = estimate(plan, stage, { probes: 2_000, seed: 17, steps: 3_000_000 });
    expect(e.low <= e.mean && e.mean <= e.high).toBe(true);
    expect(e.mean > Number(expected.nodes) / 3 && e.mean < Number(expected.nodes) * 3).toBe(true);
  });

  it('the share that is done grows to 1', () => {
    const run = openRun(plan, stage, { from: [], to: null });
    let before = 0;
    while (run.advance(3) !== 'done') {
      const share = run.shareDone;
      expect(share >= before - 1e-9 && share <= 1).toBe(true); // sums of thirds and sevenths in doubles
      before = share;
    }
    expect(run.shareDone).toBe(1);
  });
});

function compare(a: readonly number[], b: readonly number[]): number {
  for (let i = 0; i < Math.min(a.length, b.length); i += 1) if (a[i] !== b[i]) return a[i]! - b[i]!;
  return a.length - b.length;
}
