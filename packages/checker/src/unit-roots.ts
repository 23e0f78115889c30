/** Primes and square roots modulo m, for the tree of frames by gluing. FORMAT.md, section 7. */

/** Sorenson–Webster, Math. Comp. 86 (2017): no composite number below it passes the strong test to the bases 2, …, 37. */
export const PRIME_BOUND = 318_665_857_834_031_151_167_461n;
const BASES = [2n, 3n, 5n, 7n, 11n, 13n, 17n, 19n, 23n, 29n, 31n, 37n];

export function power(base: bigint, exponent: bigint, m: bigint): bigint {
  let [result, square] = [1n % m, ((base % m) + m) % m];
  for (let e = exponent; e > 0n; e >>= 1n) {
    if (e & 1n) result = (result * square) % m;
    square = (square * square) % m;
  }
  return result;
}

/** p < PRIME_BOUND. */
export function isPrime(p: bigint): boolean {
  if (p < 2n) return false;
  for (const base of BASES) if (p % base === 0n) return p === base;
  let [odd, halvings] = [p - 1n, 0];
  while (odd % 2n === 0n) {
    odd /= 2n;
    halvings += 1;
  }
  return BASES.every((base) => {
    let x = power(base, odd, p);
    if (x === 1n) return true;
    for (let i = 0; i < halvings; i += 1) {
      if (x === p - 1n) return true;
      x = (x * x) % p;
    }
    return false;
  });
}

/** b with a·b ≡ 1 modulo m; a prime to m. */
export function inverseOf(a: bigint, m: bigint): bigint {
  let [r, s, u, v] = [((a % m) + m) % m, m, 1n, 0n];
  while (s > 0n) {
    const q = r / s;
    [r, s, u, v] = [s, r - q * s, v, u - q * v];
  }
  return ((u % m) + m) % m;
}

/** All t with t² ≡ a modulo m, 0 ≤ 2t ≤ m, for a prime to m. `primes` contain those of m. */
export function rootsOfUnit(a: bigint, m: bigint, primes: readonly bigint[]): bigint[] {
  let [all, modulus] = [[0n], 1n];
  for (const p of primes) {
    let local: bigint[] | null = null;
    let q = 1n;
    // roots modulo p, p², …: each root modulo q·p lies over one modulo q
    for (; m % (q * p) === 0n; q *= p) local = local === null ? rootsModuloPrime(a, p) : lift(a, local, q, p);
    if (local === null) continue;
    const step = inverseOf(modulus, q);
    const known = local;
    all = all.flatMap((t) => known.map((s) => t + modulus * (((((s - t) * step) % q) + q) % q)));
    modulus *= q;
  }
  return all.filter((t) => 2n * t <= m).sort((x, y) => (x < y ? -1 : 1));
}

/** Roots modulo q·p over those modulo q. p odd: one each, since 2t is a unit. p = 2: tried, at most four are kept alive. */
function lift(a: bigint, roots: readonly bigint[], q: bigint, p: bigint): bigint[] {
  if (p !== 2n)
    return roots.map((t) => {
      const c = (((a - t * t) / q) * inverseOf(2n * t, p)) % p;
      return t + q * ((c + p) % p);
    });
  return roots.flatMap((t) => [t, t + q]).filter((t) => (t * t - a) % (2n * q) === 0n);
}

/** Cipolla's way (1903): in F_p[w], w² = b² − a no square, the root is (b + w)^((p+1)/2). */
function rootsModuloPrime(a: bigint, p: bigint): bigint[] {
  const r = ((a % p) + p) % p;
  if (p === 2n) return [r % 2n];
  if (power(r, (p - 1n) / 2n, p) !== 1n) return [];
  const less = (b: bigint) => (((b * b - r) % p) + p) % p;
  let b = 1n;
  while (less(b) !== 0n && power(less(b), (p - 1n) / 2n, p) === 1n) b += 1n;
  const w2 = less(b);
  if (w2 === 0n) return [b, p - b];
  let [x, y, u, v] = [1n, 0n, b, 1n];
  for (let e = (p + 1n) / 2n; e > 0n; e >>= 1n) {
    if (e & 1n) [x, y] = [(x * u + ((y * v) % p) * w2) % p, (x * v + y * u) % p];
    [u, v] = [(u * u + ((v * v) % p) * w2) % p, (2n * u * v) % p];
  }
  return [x, (p - x) % p];
}
