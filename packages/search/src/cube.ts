/**
 * Is a unimodular lattice Γ of rank n the cubic lattice Z^n, and by which basis? Γ ≅ Z^n iff it has n vectors of norm 1 up to sign: two
 * different ones are orthogonal, because inner products of vectors of norm 1 are 0 or ±1. They are the admissible columns of norm 1 for the inverse Gram matrix.
 */
import { inverse, lllGram, multiply } from '@palmette/exact';
import { admissibleColumns } from './admissible-columns.ts';
import { dualForm } from './dual-form.ts';
import type { FoundOrbit } from './found.ts';
import type { Glued } from './gluing.ts';

/** Values that may be tried to list the vectors of norm 1 of an LLL-reduced unimodular lattice. */
const STEPS = 20_000_000;

/** Γ could not be decided within the bound. */
export class CubeUndecided extends Error {
  override readonly name = 'CubeUndecided';
}

/** @returns the embedding of W in Z^n, or null if Γ is not Z^n */
export function cubeOf({ gram, products }: Glued): FoundOrbit | null {
  const n = gram.length;
  const reduction = lllGram(gram);
  const form = dualForm(inverse(reduction.gram).numerator);
  const units = form === null ? null : admissibleColumns(form, 'unit', { steps: STEPS, vectors: n });
  if (units === null) throw new CubeUndecided('the vectors of norm 1 of a glued lattice could not be listed');
  if (units.count < n) return null;
  // columns of U are the reduced basis; a unit vector is an integer combination of them
  const frame = Array.from({ length: n }, (_, k) => Array.from(units.entries.subarray(k * n, (k + 1) * n), BigInt));
  const inOldBasis = multiply(frame, transposeOf(reduction.change));
  return orbitOf(multiply(products, transposeOf(inOldBasis)));
}

function transposeOf(m: readonly (readonly bigint[])[]): bigint[][] {
  return (m[0] ?? []).map((_, j) => m.map((row) => row[j]!));
}

/** @param a r × n: row i is the image of the i-th vector of W */
function orbitOf(a: readonly (readonly bigint[])[]): FoundOrbit {
  const classes = new Map<string, { entries: number[]; count: number }>();
  let zeros = 0;
  for (const column of transposeOf(a)) {
    const lead = column.find((x) => x !== 0n);
    if (lead === undefined) {
      zeros += 1;
      continue;
    }
    const entries = column.map((x) => Number(lead < 0n ? -x : x));
    const key = entries.join(' ');
    const known = classes.get(key);
    if (known === undefined) classes.set(key, { entries, count: 1 });
    else known.count += 1;
  }
  return { columns: [...classes.values()], zeros };
}
