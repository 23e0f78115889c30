/** Square roots of units modulo any m whose primes are known: Tonelli–Shanks, Hensel's lemma, Chinese remainders. */
import { inverseModulo, modulo, powerModulo } from './integers.ts';

/**
 * All t modulo m with t² ≡ a, for a prime to m; one of each pair ±t, the smaller.
 * @param primes the primes of m
 */
export function unitRoots(a: bigint, m: bigint, primes: readonly bigint[]): bigint[] {
  let roots = [0n];
  let modulus = 1n;
  for (const p of primes) {
    let q = 1n;
    for (let rest = m; rest % p === 0n; rest /= p) q *= p;
    if (q === 1n) continue;
    const local = p === 2n ? rootsModuloPowerOfTwo(a, q) : rootsModuloOddPower(a, p, q);
    const [u, v] = [inverseModulo(modulus, q)!, modulus];
    roots = roots.flatMap((r) => local.map((s) => modulo(r + v * modulo((s - r) * u, q), modulus * q)));
    modulus *= q;
  }
  return [...new Set(roots.map((t) => (2n * t > m ? m - t : t)))].sort((x, y) => (x < y ? -1 : 1));
}

function rootsModuloPowerOfTwo(a: bigint, q: bigint): bigint[] {
  if (q === 2n) return [1n];
  if (q === 4n) return modulo(a, 4n) === 1n ? [1n, 3n] : [];
  if (modulo(a, 8n) !== 1n) return [];
  let t = 1n;
  // t² ≡ a modulo 2^k: t or t + 2^(k−1) is right modulo 2^(k+1)
  for (let k = 8n; k < q; k *= 2n) if (modulo(t * t - a, 2n * k) !== 0n) t += k / 2n;
  return [t, q - t, t + q / 2n, q / 2n - t].map((x) => modulo(x, q));
}

function rootsModuloOddPower(a: bigint, p: bigint, q: bigint): bigint[] {
  let t = rootModuloPrime(modulo(a, p), p);
  if (t === null) return [];
  // Newton's step doubles the exponent; the last one is cut to q
  for (let k = p; k < q;) {
    k = k * k < q ? k * k : q;
    t = modulo(t - (t * t - a) * inverseModulo(2n * t, k)!, k);
  }
  return [t, q - t];
}

function rootModuloPrime(a: bigint, p: bigint): bigint | null {
  if (powerModulo(a, (p - 1n) / 2n, p) !== 1n) return null;
  let [odd, twos] = [p - 1n, 0];
  for (; odd % 2n === 0n; odd /= 2n) twos += 1;
  let z = 2n;
  while (powerModulo(z, (p - 1n) / 2n, p) === 1n) z += 1n;
  let c = powerModulo(z, odd, p);
  let r = powerModulo(a, (odd + 1n) / 2n, p);
  let t = powerModulo(a, odd, p);
  for (let m = twos; t !== 1n;) {
    let i = 0;
    for (let s = t; s !== 1n; i += 1) s = (s * s) % p;
    const b = powerModulo(c, 1n << BigInt(m - i - 1), p);
    r = (r * b) % p;
    c = (b * b) % p;
    t = (t * c) % p;
    m = i;
  }
  return r;
}
