/** Gluing against frames from the list of dual vectors: the same orbits. */
import { describe, expect, it } from 'vitest';
import { determinant, multiply, transpose, type BigMatrix } from '@palmette/exact';
import { admissibleColumns } from './admissible-columns.ts';
import { cubeOf } from './cube.ts';
import { dualForm } from './dual-form.ts';
import { frameRoot, FramesLadder } from './frames-ladder.ts';
import type { FoundOrbit } from './found.ts';
import { gluings } from './gluing.ts';
import { LISTED } from './listing.ts';

/** Park–Miller with a fixed seed. */
function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => (state = (state * 48271) % 2147483647) % below;
}

function text(orbit: FoundOrbit): string {
  return orbit.columns
    .map(({ entries, count }) => `${entries.map(Number).join(' ')}*${count}`)
    .sort()
    .join(';');
}

function byList(gram: BigMatrix, excess: number): string[] {
  const form = dualForm(gram)!;
  const columns = admissibleColumns(form, excess === 0 ? 'unit' : 'square', { steps: 1e7, vectors: 1e6 })!;
  const ladder = new FramesLadder(frameRoot(form, columns, excess), gram.length + excess);
  const found: string[] = [];
  let depth = 0;
  ladder.begin(0);
  while (depth >= 0) {
    if (ladder.next(depth, Infinity) === LISTED.done) depth -= 1;
    else if (ladder.childIsLeaf(depth)) found.push(text(ladder.orbit(depth)));
    else {
      ladder.descend(depth);
      depth += 1;
      ladder.begin(depth);
    }
  }
  return found.sort();
}

function byGluing(gram: BigMatrix, excess: 0 | 1): string[] | null {
  const gluing = gluings(gram, determinant(gram), excess, 3_000);
  return gluing === null
    ? null
    : gluing.glued
        .map(cubeOf)
        .filter((orbit) => orbit !== null)
        .map(text)
        .sort();
}

describe('gluing', () => {
  it('lists the orbits that frames list, 600 random forms that embed or not, n = r and r + 1', () => {
    const next = sequence(51);
    let [compared, embed] = [0, 0];
    while (compared < 600) {
      const rank = 1 + next(5);
      const excess = next(2) === 0 ? 0 : 1;
      const width = rank + next(3);
      const b = Array.from({ length: rank }, () => Array.from({ length: width }, () => BigInt(next(5) - 2)));
      const gram = multiply(b, transpose(b));
      if (determinant(gram) === 0n) continue;
      const glued = byGluing(gram, excess);
      if (glued === null) continue;
      const listed = byList(gram, excess);
      expect({ gram, excess, glued }).toEqual({ gram, excess, glued: listed });
      compared += 1;
      if (listed.length > 0) embed += 1;
    }
    expect(embed).toBeGreaterThan(200);
  });

  it('√2·E8: 3·5·9·17 = 2,295 maximal isotropic subgroups of (Z/2)^8, of which 270 are totally singular and give E8 (common practice)', () => {
    const edges = [
      [0, 1],
      [1, 2],
      [2, 3],
      [3, 4],
      [4, 5],
      [5, 6],
      [4, 7],
    ];
    const gram = Array.from({ length: 8 }, (_, i) =>
      Array.from({ length: 8 }, (__, j) =>
        i === j ? 4n : edges.some(([a, b]) => (a === i && b === j) || (a === j && b === i)) ? -2n : 0n,
      ),
    );
    const gluing = gluings(gram, 256n, 0, 100_000)!;
    const cubes = gluing.glued.filter((g) => cubeOf(g) !== null);
    expect([gluing.glued.length, cubes.length]).toEqual([3 * 5 * 9 * 17, 3 * 5 * 9 * 17 - 270]);
  });

  it('gives up where there are too many overlattices', () => {
    const gram = Array.from({ length: 6 }, (_, i) => Array.from({ length: 6 }, (__, j) => (i === j ? 36n : 0n)));
    expect(gluings(gram, 36n ** 6n, 0, 50)).toBeNull();
  });
});
