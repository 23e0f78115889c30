export {
  bigMatrix,
  dot,
  identityMatrix,
  isIdentity,
  multiply,
  transpose,
  zeroMatrix,
  type BigMatrix,
  type ReadonlyBigMatrix,
} from './matrix.ts';
export {
  abs,
  floorDivide,
  gcd,
  integerSqrt,
  inverseModulo,
  isSquare,
  modulo,
  powerModulo,
  roundDivide,
} from './integers.ts';
export { trialFactor, type PartialFactorisation } from './factor.ts';
export { primeFactors, PROVABLE_PRIME } from './full-factor.ts';
export { unitRoots } from './root-modulo.ts';
export { hilbertSymbol, isLocalSquare, legendre } from './hilbert.ts';
export { determinant } from './determinant.ts';
export { eliminateSymmetric, rationalKernel, type Elimination } from './ldl.ts';
export { splitOff, type Splitting } from './unimodular.ts';
export { hermiteBasis } from './hermite.ts';
export { elementaryDivisors } from './smith.ts';
export { lllGram, type Reduction } from './lll.ts';
export { inverse, type RationalInverse } from './inverse.ts';
