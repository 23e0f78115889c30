/** Hilbert symbols over Q_p for nonzero integers. Serre, A Course in Arithmetic, ch. III, theorem 1. */
import { modulo, powerModulo } from './integers.ts';

function splitPower(a: bigint, p: bigint): { exponent: number; unit: bigint } {
  let exponent = 0;
  let unit = a;
  while (unit % p === 0n) {
    unit /= p;
    exponent += 1;
  }
  return { exponent, unit };
}

/** Legendre symbol of a unit modulo an odd prime. */
export function legendre(a: bigint, p: bigint): 1 | -1 {
  return powerModulo(a, (p - 1n) / 2n, p) === 1n ? 1 : -1;
}

/** (a, b)_p: 1 if z² = a x² + b y² has a nontrivial solution in Q_p, else −1. */
export function hilbertSymbol(a: bigint, b: bigint, p: bigint): 1 | -1 {
  const { exponent: alpha, unit: u } = splitPower(a, p);
  const { exponent: beta, unit: v } = splitPower(b, p);
  if (p === 2n) {
    const epsilon = (x: bigint) => (modulo(x, 4n) === 1n ? 0 : 1);
    const omega = (x: bigint) => (modulo(x, 8n) === 1n || modulo(x, 8n) === 7n ? 0 : 1);
    const exponent = epsilon(u) * epsilon(v) + alpha * omega(v) + beta * omega(u);
    return exponent % 2 === 0 ? 1 : -1;
  }
  let sign: 1 | -1 = alpha % 2 === 1 && beta % 2 === 1 && modulo(p, 4n) === 3n ? -1 : 1;
  if (beta % 2 === 1 && legendre(u, p) === -1) sign = sign === 1 ? -1 : 1;
  if (alpha % 2 === 1 && legendre(v, p) === -1) sign = sign === 1 ? -1 : 1;
  return sign;
}

/** Whether a nonzero integer is a square in Q_p. */
export function isLocalSquare(a: bigint, p: bigint): boolean {
  const { exponent, unit } = splitPower(a, p);
  if (exponent % 2 === 1) return false;
  return p === 2n ? modulo(unit, 8n) === 1n : legendre(unit, p) === 1;
}
