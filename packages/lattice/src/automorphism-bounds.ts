/** What bounds the search for automorphisms. Deterministic counts, never a clock; an answer beyond them names one. */

/** One table: name, bound, meaning. */
export const AUTOMORPHISM_BOUNDS = {
  /** Rank of the reduced lattice. */
  rank: 100,
  /** Vectors up to sign on which the group is made to act. */
  vectors: 4_000,
  /** Entries tried while those vectors are listed. */
  steps: 3_000_000,
  /** Vectors placed in a cell while images are tried: images tried × vectors. */
  placements: 400_000_000,
} as const;

/** The search met one of the bounds. */
export class BeyondBound extends Error {
  readonly code = 'automorphisms-beyond-bound';
}
