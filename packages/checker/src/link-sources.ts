/** Goeritz forms of planar diagrams, cut and flow lattices of graphs. Conventions of the published interface. */
import { square } from './arithmetic.ts';
import { integerOf, listOf, objectOf, oneOf, Rejection, type Json } from './reading.ts';

/** Regions as cycles of corners: from corner c of crossing x along its edge c + 1 to the next corner on the same side. */
function regionsOf(pd: readonly (readonly bigint[])[], place: string): number[][] {
  const region = pd.map(() => [-1, -1, -1, -1]);
  const otherEnd = (x: number, slot: number): [number, number] => {
    const label = pd[x]![slot]!;
    for (let y = 0; y < pd.length; y += 1)
      for (let t = 0; t < 4; t += 1) if (pd[y]![t] === label && (y !== x || t !== slot)) return [y, t];
    throw new Rejection(place, `label ${label} only once`);
  };
  let count = 0;
  pd.forEach((_, x) => {
    for (let c = 0; c < 4; c += 1) {
      if (region[x]![c]! >= 0) continue;
      for (let [y, k] = [x, c]; region[y]![k]! < 0;) {
        region[y]![k] = count;
        // the corner ends at slot k + 1; along that edge the region stays on the same side: corner t at the other end
        [y, k] = otherEnd(y, (k + 1) % 4);
      }
      count += 1;
    }
  });
  if (count !== pd.length + 2) throw new Rejection(place, `${count} regions, not crossings + 2`);
  return region;
}

export function diagramForm(value: Json, place: string): bigint[][] {
  const o = objectOf(value, place, ['kind', 'pd', 'colouring']);
  const pd = listOf(o['pd'], `${place}/pd`).map((x, i) =>
    listOf(x, `${place}/pd/${i}`).map((label, j) => integerOf(label, `${place}/pd/${i}/${j}`)),
  );
  const seen = new Map<bigint, number>();
  for (const crossing of pd) {
    if (crossing.length !== 4) throw new Rejection(`${place}/pd`, 'a crossing without four labels');
    for (const label of crossing) seen.set(label, (seen.get(label) ?? 0) + 1);
  }
  if (pd.length === 0 || [...seen.values()].some((n) => n !== 2))
    throw new Rejection(`${place}/pd`, 'a label that does not stand twice');
  if (o['colouring'] !== 0 && o['colouring'] !== 1) throw new Rejection(`${place}/colouring`, 'expected 0 or 1');
  const region = regionsOf(pd, `${place}/pd`);
  // colours spread from the first crossing: opposite corners agree, neighbours differ
  const white = new Map<number, boolean>([[region[0]![0]!, o['colouring'] === 0]]);
  for (let changed = true; changed;) {
    changed = false;
    for (const corners of region) {
      const known = corners.findIndex((r) => white.has(r));
      if (known < 0) continue;
      corners.forEach((r, c) => {
        const colour = (c - known) % 2 === 0 ? white.get(corners[known]!)! : !white.get(corners[known]!)!;
        if (!white.has(r)) {
          white.set(r, colour);
          changed = true;
        } else if (white.get(r) !== colour) throw new Rejection(`${place}/pd`, 'no checkerboard colouring');
      });
    }
  }
  if (region.flat().some((r) => !white.has(r))) throw new Rejection(`${place}/pd`, 'not connected');
  const generators = [...new Set(region.flat().filter((r) => white.get(r)))].slice(1);
  const form = square(generators.length);
  for (const corners of region) {
    const eta = white.get(corners[0]!) ? 1n : -1n;
    const [a, b] = eta > 0n ? [corners[0]!, corners[2]!] : [corners[1]!, corners[3]!];
    join(form, generators.indexOf(a), generators.indexOf(b), a === b, eta);
  }
  return form;
}

/** Adds an edge of weight eta between generators i and j (−1: the dropped one). */
function join(form: bigint[][], i: number, j: number, loop: boolean, eta: bigint): void {
  if (loop) return;
  if (i >= 0) form[i]![i]! += eta;
  if (j >= 0) form[j]![j]! += eta;
  if (i < 0 || j < 0) return;
  form[i]![j]! -= eta;
  form[j]![i]! -= eta;
}

export function graphForm(value: Json, place: string): bigint[][] {
  const o = objectOf(value, place, ['kind', 'edges', 'lattice']);
  const edges = listOf(o['edges'], `${place}/edges`).map((e, k) => {
    const two = listOf(e, `${place}/edges/${k}`);
    if (two.length !== 2) throw new Rejection(`${place}/edges/${k}`, 'no pair of vertices');
    return [integerOf(two[0], `${place}/edges/${k}/0`), integerOf(two[1], `${place}/edges/${k}/1`)] as const;
  });
  const vertices = [...new Set(edges.flat())].sort((a, b) => (a < b ? -1 : 1));
  // breadth first from the lowest vertex of each component: the edge that reached a vertex, and from where
  const reached = new Map<bigint, { edge: number; from: bigint } | null>();
  for (const root of vertices) {
    if (reached.has(root)) continue;
    reached.set(root, null);
    const line = [root];
    for (const v of line) {
      edges.forEach(([a, b], edge) => {
        if (a !== v && b !== v) return;
        const next = a === v ? b : a;
        if (reached.has(next)) return;
        reached.set(next, { edge, from: v });
        line.push(next);
      });
    }
  }
  if (oneOf(o['lattice'], `${place}/lattice`, ['cuts', 'flows']) === 'cuts') {
    const kept = vertices.filter((v) => reached.get(v) !== null);
    const form = square(kept.length);
    for (const [a, b] of edges) join(form, kept.indexOf(a), kept.indexOf(b), a === b, 1n);
    return form;
  }
  const treeEdges = new Set([...reached.values()].map((r) => r?.edge));
  const cycles = edges.flatMap(([a, b], k) => {
    if (treeEdges.has(k)) return [];
    const cycle = edges.map((_, e): bigint => (e === k ? 1n : 0n));
    for (const [end, sign] of [
      [b, 1n],
      [a, -1n],
    ] as const) {
      for (let v = end, up = reached.get(v)!; up !== null; v = up.from, up = reached.get(v)!)
        cycle[up.edge]! += edges[up.edge]![0] === v ? sign : -sign;
    }
    return [cycle];
  });
  return cycles.map((x) => cycles.map((y) => x.reduce((sum, c, e) => sum + c * y[e]!, 0n)));
}
