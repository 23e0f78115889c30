/** The listing by the projection bound against the plain one: the same nodes, the same orbits, resumable anywhere. */
import { describe, expect, it } from 'vitest';
import { determinant, multiply, transpose, type BigMatrix } from '@palmette/exact';
import { FewestLadder } from './fewest-ladder.ts';
import { openRowLadder, type Ladder } from './ladder.ts';
import { LISTED } from './listing.ts';
import { smallestResidual } from './order.ts';
import { toPlanMatrix } from './plan.ts';
import { projectionForm } from './projection-form.ts';
import { ProjectionLadder } from './projection-ladder.ts';
import { workingForm, type WorkingForm } from './working-form.ts';

/** Park–Miller with a fixed seed. */
function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => (state = (state * 48271) % 2147483647) % below;
}
type Next = (below: number) => number;

function formOf(gram: BigMatrix): WorkingForm {
  return workingForm({
    revision: 2,
    gram: toPlanMatrix(gram),
    change: null,
    order: smallestResidual(gram),
    target: { excess: 0 },
    scope: 'all',
    forced: 'rows',
    secondOpinion: false,
    why: '',
  });
}

interface Tree {
  readonly nodes: number;
  readonly leaves: readonly string[];
}

/** @param restart how often, in 64 steps, the path is left and entered again by its states */
function walk(open: () => Ladder, next: Next, restart: number): Tree {
  let ladder = open();
  let nodes = 1;
  const leaves: string[] = [];
  let depth = 0;
  ladder.begin(0);
  while (depth >= 0) {
    if (next(64) < restart) {
      const states = Array.from({ length: depth + 1 }, (_, k) => JSON.stringify(ladder.state(k)));
      ladder = open();
      states.forEach((state, k) => {
        if (k > 0) ladder.descend(k - 1);
        ladder.begin(k);
        ladder.restore(k, JSON.parse(state));
      });
    }
    const listed = ladder.next(depth, restart > 0 ? 1 + next(20) : Infinity);
    if (listed === LISTED.paused) continue;
    if (listed === LISTED.done) {
      depth -= 1;
      continue;
    }
    nodes += 1;
    if (ladder.childIsLeaf(depth)) {
      const { columns, zeros } = ladder.orbit(depth);
      const texts = columns.map(({ entries, count }) => {
        const lead = entries.find((x) => x !== 0)!;
        return `${entries.map((x) => (Number(lead) < 0 ? 0 - Number(x) : Number(x))).join(' ')}*${count}`;
      });
      leaves.push(`${texts.sort().join(';')} ${zeros}`);
      continue;
    }
    ladder.descend(depth);
    depth += 1;
    ladder.begin(depth);
  }
  return { nodes, leaves: leaves.sort() };
}

function randomForm(next: Next): BigMatrix {
  for (;;) {
    const rank = 1 + next(5);
    const width = rank + next(3);
    const range = 1 + next(2);
    const b = Array.from({ length: rank }, () =>
      Array.from({ length: width }, () => BigInt(next(2 * range + 1) - range)),
    );
    const gram = multiply(b, transpose(b));
    if (determinant(gram) !== 0n && gram.every((row, i) => row[i]! < 26n)) return gram;
  }
}

describe('the projection bound', () => {
  it('lists the nodes and orbits of the plain listing, 1,000 random forms', () => {
    const next = sequence(61);
    for (let k = 0; k < 1_000; k += 1) {
      const gram = randomForm(next);
      const n = gram.length + next(3);
      const form = formOf(gram);
      expect(openRowLadder(form, n)).toBeInstanceOf(ProjectionLadder);
      const plain = walk(() => openRowLadder({ ...form, projection: null }, n), next, 0);
      const projected = walk(() => openRowLadder(form, n), next, 0);
      expect({ gram, n, ...projected }).toEqual({ gram, n, ...plain });
    }
  });

  it('rows chosen at each node list the same orbits, left and entered again too, 400 random forms', () => {
    const next = sequence(64);
    for (let k = 0; k < 400; k += 1) {
      const gram = randomForm(next);
      const n = gram.length + next(3);
      const form = formOf(gram);
      const { leaves } = walk(() => openRowLadder(form, n), next, 0);
      const whole = walk(() => new FewestLadder(form, n), next, 0);
      expect({ gram, n, leaves: whole.leaves }).toEqual({ gram, n, leaves });
      expect({ gram, n, ...walk(() => new FewestLadder(form, n), next, 2) }).toEqual({ gram, n, ...whole });
    }
  });

  it('left and entered again at random: the same', () => {
    const next = sequence(62);
    for (let k = 0; k < 150; k += 1) {
      const gram = randomForm(next);
      const n = gram.length + next(2);
      const form = formOf(gram);
      const whole = walk(() => openRowLadder(form, n), next, 0);
      expect({ gram, n, ...walk(() => openRowLadder(form, n), next, 6) }).toEqual({ gram, n, ...whole });
    }
  });

  it('on big numbers: 30 forms with minors between 2^36 and 2^47 times a small index', () => {
    const next = sequence(63);
    for (let done = 0; done < 30;) {
      // a form with small entries, moved to one with a large determinant by a factor: norms grow, nothing else does
      const rank = 3;
      const b = Array.from({ length: rank }, (_, i) =>
        Array.from({ length: rank }, (__, j) => (i === j ? BigInt(40 + next(30)) : BigInt(next(7) - 3))),
      );
      const gram = multiply(b, transpose(b));
      const form = formOf(gram);
      if (form.projection === null || form.projection.minors.at(-1)! < 2 ** 36) continue;
      const projected = walk(() => openRowLadder(form, rank), next, 0);
      const plain = walk(() => openRowLadder({ ...form, projection: null }, rank), next, 0);
      expect({ gram, ...projected }).toEqual({ gram, ...plain });
      done += 1;
    }
  });

  it('is not used where doubles are not proved exact', () => {
    const gram = [
      [2n ** 24n, 1n],
      [1n, 2n ** 24n],
    ];
    expect(projectionForm(gram)).toBeNull();
    expect(projectionForm([[2n ** 24n]])).not.toBeNull();
    expect(openRowLadder(formOf(gram), 4)).not.toBeInstanceOf(ProjectionLadder);
  });
});
