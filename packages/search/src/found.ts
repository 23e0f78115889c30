/** An orbit that the search found, in the rows of the working Gram: distinct columns up to sign with their counts. */
export interface FoundOrbit {
  /** `entries[w]` belongs to row w of the working Gram (not to its depth). No column is zero, no two are equal up to sign. */
  readonly columns: readonly { readonly entries: readonly (number | string)[]; readonly count: number }[];
  readonly zeros: number;
}
