/**
 * Candidate orders of the rows. The order decides the size of the tree: a partial lattice that stays connected and begins
 * with its lightest vectors leaves little choice at each step.
 */
import type { ReadonlyBigMatrix } from '@palmette/exact';

/** Above this rank only the cheap order is made. */
const CAREFUL_RANK = 64;

/** Orders to be compared, the cheapest to make first; each a permutation of the rows. */
export function candidateOrders(gram: ReadonlyBigMatrix): number[][] {
  const orders = [connectedLightestFirst(gram)];
  if (gram.length <= CAREFUL_RANK && gram.length > 1) orders.push(smallestResidual(gram), residualConnected(gram));
  return orders.filter((order, i) => orders.findIndex((other) => other.join() === order.join()) === i);
}

/** Each next row is the lightest that meets an earlier one; ties go to the one that meets most, then to the earlier. */
export function connectedLightestFirst(gram: ReadonlyBigMatrix): number[] {
  const n = gram.length;
  const meets = new Array<number>(n).fill(0);
  const neighbours = gram.map((row, i) => row.flatMap((x, j) => (x !== 0n && i !== j ? [j] : [])));
  const left = new Set(gram.keys());
  const order: number[] = [];
  const better = (a: number, b: number): boolean => {
    const [na, nb] = [gram[a]![a]!, gram[b]![b]!];
    const [ca, cb] = [meets[a]! > 0, meets[b]! > 0];
    if (ca !== cb) return ca;
    if (na !== nb) return na < nb;
    if (meets[a] !== meets[b]) return meets[a]! > meets[b]!;
    return a < b;
  };
  while (left.size > 0) {
    let best = -1;
    for (const i of left) if (best < 0 || better(i, best)) best = i;
    order.push(best);
    left.delete(best);
    for (const j of neighbours[best]!) meets[j]! += 1;
  }
  return order;
}

/** Each next row has the smallest squared distance from the span of the earlier ones (its Gram–Schmidt residual). */
export function smallestResidual(gram: ReadonlyBigMatrix): number[] {
  return greedyByResidual(gram, () => true);
}

/** The same among the rows that meet an earlier one. */
export function residualConnected(gram: ReadonlyBigMatrix): number[] {
  return greedyByResidual(gram, (i, order) => order.some((j) => gram[i]![j] !== 0n));
}

function greedyByResidual(
  gram: ReadonlyBigMatrix,
  preferred: (i: number, order: readonly number[]) => boolean,
): number[] {
  // fraction-free elimination: after k steps m[i][i] / d is the residual of row i, with one d for all rows
  const m = gram.map((row) => [...row]);
  let d = 1n;
  const left = new Set(gram.keys());
  const order: number[] = [];
  while (left.size > 0) {
    let best = -1;
    let bestPreferred = false;
    for (const i of left) {
      const good = order.length === 0 || preferred(i, order);
      if (best < 0 || (good && !bestPreferred) || (good === bestPreferred && lighter(i, best))) {
        best = i;
        bestPreferred = good;
      }
    }
    order.push(best);
    left.delete(best);
    const pivot = m[best]![best]!;
    for (const i of left) {
      for (const j of left) {
        if (j < i) continue;
        const value = (m[i]![j]! * pivot - m[i]![best]! * m[best]![j]!) / d;
        m[i]![j] = value;
        m[j]![i] = value;
      }
    }
    d = pivot;
  }
  return order;

  function lighter(a: number, b: number): boolean {
    if (m[a]![a] !== m[b]![b]) return m[a]![a]! < m[b]![b]!;
    if (gram[a]![a] !== gram[b]![b]) return gram[a]![a]! < gram[b]![b]!;
    return a < b;
  }
}
