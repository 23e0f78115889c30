/** Bounds that are checked before any work starts. One table: name, bound, meaning. */
export const LIMITS = {
  /** Rows of a lattice as entered. */
  rank: 2_500,
  /** Largest n of a target; zero columns cost nothing. */
  dimension: 1_000_000,
  /** Decimal digits of one integer. */
  digits: 1_000,
  /** Nesting of a JSON document. */
  depth: 64,
  /** Characters of a question document. */
  questionCharacters: 32 * 1024 * 1024,
  /** Summands of a `sum`, counted through nested sums. */
  summands: 200,
  titleCharacters: 200,
  nameCharacters: 60,
  /** CPU seconds of one budget: 366 days. */
  budgetCpuSeconds: 366 * 24 * 3600,
  noteCharacters: 20_000,
  passwordCharacters: 1_000,
  passwordMinimum: 10,
  pageItems: 500,
} as const;
