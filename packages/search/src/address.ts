/** Addresses of nodes: child indices from the root, compared in depth-first preorder. */

export type Address = readonly number[];

/** Half-open, in preorder: the nodes at `from` and after, before `to`; null is the end of the tree. */
export interface Interval {
  readonly from: Address;
  readonly to: Address | null;
}

/** Negative if a comes before b in preorder: an ancestor comes before its descendants. */
export function compareAddresses(a: Address, b: Address): number {
  const shared = Math.min(a.length, b.length);
  for (let i = 0; i < shared; i += 1) {
    if (a[i] !== b[i]) return a[i]! - b[i]!;
  }
  return a.length - b.length;
}
