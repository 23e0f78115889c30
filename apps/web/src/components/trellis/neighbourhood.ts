/** A vertex of a big trellis with its neighbours, as a small trellis of its own. */
import { isZero, type GraphEdge, type TrellisInput } from '@palmette/drawing';

export interface Neighbourhood {
  readonly input: TrellisInput;
  readonly sentence: string;
}

/** Vertices that one picture takes. */
const SHOWN = 12;

export function neighbourhood(whole: TrellisInput, centre: number): Neighbourhood {
  const near = new Set<number>();
  for (const [a, b] of whole.edges) {
    if (a === centre) near.add(b);
    if (b === centre) near.add(a);
  }
  near.delete(centre);
  const all = [...near].sort((a, b) => a - b);
  const rows = [centre, ...all.slice(0, SHOWN - 1)].sort((a, b) => a - b);
  const at = new Map(rows.map((row, i) => [row, i]));
  const columns: number[] = [];
  const width = whole.matrix[0]?.length ?? 0;
  for (let j = 0; j < width; j += 1) if (rows.some((row) => !isZero(whole.matrix[row]![j]!))) columns.push(j);
  const left = all.length - (rows.length - 1);
  return {
    input: {
      matrix: rows.map((row) => columns.map((j) => whole.matrix[row]![j]!)),
      names: rows.map((row) => whole.names[row]!),
      weights: rows.map((row) => whole.weights[row]!),
      edges: whole.edges.flatMap(([a, b, value]): GraphEdge[] =>
        at.has(a) && at.has(b) ? [[at.get(a)!, at.get(b)!, value]] : [],
      ),
      columnNumbers: columns.map((j) => j + 1),
    },
    sentence:
      `The whole is too big to be seen at once. Shown with its neighbours and the ${columns.length} wires that they use` +
      (left > 0 ? `; ${left} further neighbours are left out.` : '.'),
  };
}
