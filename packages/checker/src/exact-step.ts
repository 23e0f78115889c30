/**
 * The one arithmetic step of the fast listing: (a·b − c·d) / e for integers whose quotient is known to be an integer below
 * 2^53 in size. Doubles do it exactly while both products together stay below 2^53 (a product that does not is rounded to
 * at least 2^53, so the test sees it); beyond that the step is done once in bigint.
 */
export function exactStep(a: number, b: number, c: number, d: number, e: number): number {
  const p = a * b;
  const q = c * d;
  if (Math.abs(p) + Math.abs(q) <= Number.MAX_SAFE_INTEGER) return (p - q) / e;
  return Number((BigInt(a) * BigInt(b) - BigInt(c) * BigInt(d)) / BigInt(e));
}
