/** A plan's Gram matrix in the order of its rows, as the listing reads it, and the proof that doubles are exact. */
import type { Plan } from './plan.ts';
import { planGram } from './plan.ts';
import { projectionForm, PROJECTED_RANK, type ProjectionForm } from './projection-form.ts';

/**
 * With all norms below this, |b_i| and S_i stay below 2^25 (Cauchy–Schwarz in the form itself), products of two of them
 * below 2^50, and nothing reaches 2^53. A lattice of rank 1 multiplies nothing: its norm need only be exact.
 */
const NORM_BOUND = 2n ** 25n;

export interface WorkingForm {
  readonly rank: number;
  readonly order: readonly number[];
  /** Doubles are exact: use them. */
  readonly small: boolean;
  /** Norm of the row at each depth. */
  readonly norms: Float64Array;
  /** Inner products of the row at each depth with the rows before it. */
  readonly targets: readonly Float64Array[];
  readonly bigNorms: readonly bigint[];
  readonly bigTargets: readonly (readonly bigint[])[];
  /** What the projection bound needs; null where it is not used. */
  readonly projection: ProjectionForm | null;
}

export function workingForm(plan: Plan): WorkingForm {
  const gram = planGram(plan);
  const { order } = plan;
  const bigNorms = order.map((w) => gram[w]![w]!);
  const small = bigNorms.length === 1 ? bigNorms[0]! < 2n ** 53n : bigNorms.every((norm) => norm < NORM_BOUND);
  const bigTargets = small ? [] : order.map((w, k) => order.slice(0, k).map((v) => gram[w]![v]!));
  return {
    rank: order.length,
    order,
    small,
    norms: Float64Array.from(small ? bigNorms : [], Number),
    targets: small ? order.map((w, k) => Float64Array.from({ length: k }, (_, i) => Number(gram[w]![order[i]!]!))) : [],
    bigNorms,
    bigTargets,
    projection:
      small && order.length <= PROJECTED_RANK ? projectionForm(order.map((w) => order.map((v) => gram[w]![v]!))) : null,
  };
}
