/** Number theory of single integers. */

export function abs(a: bigint): bigint {
  return a < 0n ? -a : a;
}

export function gcd(a: bigint, b: bigint): bigint {
  let x = abs(a);
  let y = abs(b);
  while (y !== 0n) [x, y] = [y, x % y];
  return x;
}

/** Quotient rounded to the nearest integer (halves away from zero); b > 0. */
export function roundDivide(a: bigint, b: bigint): bigint {
  return a >= 0n ? (2n * a + b) / (2n * b) : -((-2n * a + b) / (2n * b));
}

/** Quotient rounded down; b > 0. */
export function floorDivide(a: bigint, b: bigint): bigint {
  const q = a / b;
  return a % b < 0n ? q - 1n : q;
}

/** Residue in 0 … |m| − 1. */
export function modulo(a: bigint, m: bigint): bigint {
  const r = a % m;
  return r < 0n ? r + abs(m) : r;
}

/** Largest s with s² ≤ a; a ≥ 0 (Newton's iteration from above). */
export function integerSqrt(a: bigint): bigint {
  if (a < 0n) throw new RangeError(`expected a number ≥ 0, found ${a}`);
  if (a < 2n) return a;
  let x = 1n << BigInt((a.toString(2).length + 1) >> 1);
  for (;;) {
    const y = (x + a / x) >> 1n;
    if (y >= x) return x;
    x = y;
  }
}

export function isSquare(a: bigint): boolean {
  return a >= 0n && integerSqrt(a) ** 2n === a;
}

/** The inverse of a modulo m > 0, or null if they share a factor. */
export function inverseModulo(a: bigint, m: bigint): bigint | null {
  let [r0, r1] = [m, modulo(a, m)];
  let [s0, s1] = [0n, 1n];
  while (r1 !== 0n) {
    const q = r0 / r1;
    [r0, r1] = [r1, r0 - q * r1];
    [s0, s1] = [s1, s0 - q * s1];
  }
  return r0 === 1n ? modulo(s0, m) : null;
}

/** a^e modulo m. */
export function powerModulo(a: bigint, e: bigint, m: bigint): bigint {
  let base = modulo(a, m);
  let out = 1n % m;
  for (let k = e; k > 0n; k >>= 1n) {
    if (k & 1n) out = (out * base) % m;
    base = (base * base) % m;
  }
  return out;
}
