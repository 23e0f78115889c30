/** The frozen plan of a search: what decides its trees. JSON only, so that it can be stored and sent as it is. */
import type { BigMatrix, ReadonlyBigMatrix } from '@palmette/exact';
import type { Method } from './method.ts';

/** Above this rank a matrix is written as its nonzero entries. */
const SPARSE_ABOVE = 200;

export type PlanMatrix =
  | { readonly rows: readonly (readonly string[])[] }
  | { readonly size: number; readonly entries: readonly (readonly [number, number, string])[] };

export type PlanTarget =
  | { readonly dimension: number }
  | { readonly excess: number }
  | { readonly least: { readonly upTo?: number | undefined } }
  | { readonly any: true };

export interface Plan {
  /** Raised when the same question may give another tree. */
  readonly revision: 2;
  /** The working Gram W, positive definite. */
  readonly gram: PlanMatrix;
  /** U with Uᵀ·(reduced Gram)·U = W, and its inverse; null is the identity. */
  readonly change: { readonly matrix: PlanMatrix; readonly inverse: PlanMatrix } | null;
  /** Row of W at each depth of a tree of rows. */
  readonly order: readonly number[];
  readonly target: PlanTarget;
  readonly scope: 'one' | 'all';
  /** The method that the question asks for; null leaves it to the chooser. */
  readonly forced: Method | null;
  /** Answer by a second method too. */
  readonly secondOpinion: boolean;
  /** Why this basis and this order of rows, in words. */
  readonly why: string;
}

export function toPlanMatrix(matrix: ReadonlyBigMatrix): PlanMatrix {
  if (matrix.length <= SPARSE_ABOVE) return { rows: matrix.map((row) => row.map(String)) };
  const entries: [number, number, string][] = [];
  matrix.forEach((row, i) => row.forEach((x, j) => x !== 0n && entries.push([i, j, x.toString()])));
  return { size: matrix.length, entries };
}

export function fromPlanMatrix(matrix: PlanMatrix): BigMatrix {
  if ('rows' in matrix) return matrix.rows.map((row) => row.map(BigInt));
  const out: BigMatrix = Array.from({ length: matrix.size }, () => new Array<bigint>(matrix.size).fill(0n));
  for (const [i, j, x] of matrix.entries) out[i]![j] = BigInt(x);
  return out;
}

let lastRead: { readonly text: string; readonly plan: Plan } | null = null;

/**
 * A plan from its JSON text. The same text gives the same object while it is the last one read, so that what a thread has prepared for a
 * plan (lists of columns) serves all parcels of it.
 */
export function readPlan(text: string): Plan {
  if (lastRead?.text !== text) lastRead = { text, plan: JSON.parse(text) as Plan };
  return lastRead.plan;
}

export function planGram(plan: Plan): BigMatrix {
  return fromPlanMatrix(plan.gram);
}
