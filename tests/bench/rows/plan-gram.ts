/** The working Gram of a plan, as numbers. */
import type { Plan } from '@palmette/search';

export function planGram(plan: Plan): bigint[][] {
  if ('rows' in plan.gram) return plan.gram.rows.map((row) => row.map(BigInt));
  throw new Error('expected a dense plan');
}
