/**
 * Planar diagram codes: regions, checkerboard colouring, Goeritz form (Goeritz 1933; Gordon–Litherland, Invent. Math. 47
 * (1978)). Corner c of a crossing lies between its edges c and c + 1.
 */
import { zeroMatrix } from '@palmette/exact';
import { SourceFault, type BuiltForm, type DiagramSource } from './source.ts';

/** Region number of each corner, in order of first occurrence (crossing, corner). */
export function diagramRegions(pd: readonly (readonly bigint[])[]): {
  readonly corners: number[][];
  readonly count: number;
} {
  const ends = new Map<bigint, [number, number][]>();
  pd.forEach((crossing, x) =>
    crossing.forEach((label, slot) => ends.set(label, [...(ends.get(label) ?? []), [x, slot]])),
  );
  const parent = Array.from({ length: 4 * pd.length }, (_, i) => i);
  const root = (i: number): number => (parent[i] === i ? i : (parent[i] = root(parent[i]!)));
  const join = (a: number, b: number) => (parent[root(a)] = root(b));
  const reached = new Set([0]);
  for (const [label, places] of ends) {
    if (places.length !== 2) {
      const [x, slot] = places[0]!;
      throw new SourceFault(`/pd/${x}/${slot}`, `expected each label twice, found ${label} ${places.length} times`);
    }
    const [[x, s], [y, t]] = places as [[number, number], [number, number]];
    join(4 * x + s, 4 * y + ((t + 3) % 4));
    join(4 * x + ((s + 3) % 4), 4 * y + t);
  }
  for (const queue = [0]; queue.length > 0;) {
    const x = queue.pop()!;
    for (const [y] of pd[x]!.flatMap((label) => ends.get(label)!)) {
      if (reached.has(y)) continue;
      reached.add(y);
      queue.push(y);
    }
  }
  if (reached.size < pd.length)
    throw new SourceFault(
      '/pd',
      `expected a connected diagram, found only ${reached.size} of ${pd.length} crossings joined to the first`,
    );
  const numbers = new Map<number, number>();
  const corners = pd.map((_, x) =>
    [0, 1, 2, 3].map((c) => {
      const r = root(4 * x + c);
      if (!numbers.has(r)) numbers.set(r, numbers.size);
      return numbers.get(r)!;
    }),
  );
  if (numbers.size !== pd.length + 2)
    throw new SourceFault(
      '/pd',
      `expected ${pd.length + 2} regions (crossings + 2), found ${numbers.size}: this is no planar diagram`,
    );
  return { corners, count: numbers.size };
}

export function diagramForm(source: DiagramSource): BuiltForm {
  const pd = source.pd.map((crossing) => crossing.map(BigInt));
  const { corners, count } = diagramRegions(pd);
  const white = colourWhite(corners, count, source.colouring);
  const order: number[] = [];
  for (const crossing of corners)
    for (const region of crossing) if (white[region] && !order.includes(region)) order.push(region);
  const place = new Map(order.map((region, i) => [region, i - 1])); // the first is dropped
  const form = zeroMatrix(order.length - 1, order.length - 1);
  for (const crossing of corners) {
    const eta = white[crossing[0]!] ? 1n : -1n;
    const [a, b] = (white[crossing[0]!] ? [crossing[0]!, crossing[2]!] : [crossing[1]!, crossing[3]!]).map((r) =>
      place.get(r)!,
    ) as [number, number];
    if (a === b) continue;
    if (a >= 0) form[a]![a]! += eta;
    if (b >= 0) form[b]![b]! += eta;
    if (a >= 0 && b >= 0) {
      form[a]![b]! -= eta;
      form[b]![a]! -= eta;
    }
  }
  const alternating = corners.every((crossing) => white[crossing[0]!] === white[corners[0]![0]!]);
  return {
    form,
    names: form.map((_, i) => `r${i + 1}`),
    graph: null,
    remarks: [
      alternating
        ? 'The diagram is alternating: both colourings are definite, of opposite signs.'
        : 'The diagram is not alternating.',
    ],
  };
}

/** Which regions are white: colouring 0 has the regions at corners 0 and 2 of the first crossing white. */
function colourWhite(corners: readonly (readonly number[])[], count: number, colouring: 0 | 1): boolean[] {
  const colour: (boolean | undefined)[] = new Array<undefined>(count).fill(undefined);
  const at: number[][] = Array.from({ length: count }, () => []);
  corners.forEach((crossing, x) => crossing.forEach((region) => at[region]!.push(x)));
  colour[corners[0]![0]!] = colouring === 0;
  for (const queue = [corners[0]![0]!]; queue.length > 0;) {
    const region = queue.pop()!;
    for (const x of at[region]!) {
      corners[x]!.forEach((other, c) => {
        const own = corners[x]!.indexOf(region);
        const wanted = (c - own) % 2 === 0 ? colour[region]! : !colour[region]!;
        if (colour[other] === undefined) {
          colour[other] = wanted;
          queue.push(other);
        } else if (colour[other] !== wanted)
          throw new SourceFault(
            `/pd/${x}`,
            'expected a diagram that can be coloured like a checkerboard, found one that cannot',
          );
      });
    }
  }
  return colour as boolean[];
}
