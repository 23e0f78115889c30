/** Invariants of a lattice that the screens and the tests on embeddings use. */
import { elementaryDivisors } from '@palmette/exact';
import { reducedBasis, type Lattice } from './build.ts';

/** Elementary divisors greater than 1 of the discriminant group Λ*-/Λ, each dividing the next. */
export function discriminantGroup(lattice: Lattice): bigint[] {
  return elementaryDivisors(reducedBasis(lattice).gram).filter((d) => d !== 1n);
}

/** The signature in words: "negative definite", "positive semidefinite, nullity 1", "zero". */
export function definiteness(lattice: Lattice): string {
  if (lattice.rank === 0) return lattice.nullity === 0 ? 'rank 0' : `zero, nullity ${lattice.nullity}`;
  const sign = lattice.sign === 1 ? 'positive' : 'negative';
  return lattice.nullity === 0 ? `${sign} definite` : `${sign} semidefinite, nullity ${lattice.nullity}`;
}
