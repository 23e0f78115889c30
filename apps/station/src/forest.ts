/**
 * Addresses of a check with several trees. A certificate can hold more than one tree; their parcels form one cover all
 * the same when the trees hang in order under one root: tree t begins at [t] and ends where tree t + 1 begins.
 */
import type { Interval } from '@palmette/threads';

export function inForest(tree: number, interval: Interval): Interval {
  return {
    from: [tree, ...interval.from],
    to: interval.to === null ? [tree + 1] : [tree, ...interval.to],
  };
}

export function inTree(interval: Interval): Interval & { readonly tree: number } {
  const tree = interval.from[0]!;
  const within = interval.to !== null && interval.to[0] === tree;
  return { tree, from: interval.from.slice(1), to: within ? interval.to!.slice(1) : null };
}
