/** The problem of an instance as solvers take it: peers are given the reduced Gram matrix, free of charge. */
import { lllGram } from '@palmette/exact';
import { buildLattice, reducedBasis } from '@palmette/lattice';
import type { Instance } from './instances.ts';
import type { Problem } from './solver.ts';

/** Trees and sums keep their basis, in which most inner products are 0; matrices are LLL-reduced. */
export function problemOf({ document }: Instance): Problem {
  const { gram } = reducedBasis(buildLattice(document.source));
  const given = document.source.kind === 'matrix' ? lllGram(gram).gram : gram;
  return {
    gram: given.map((row) => row.map(Number)),
    dimension: gram.length + document.target.excess,
    scope: document.scope,
    document: JSON.stringify(document),
  };
}
