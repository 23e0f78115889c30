/**
 * The states of a search, its verdicts and grounds: each word stands here once.
 * DEVELOPERS.md draws the transitions.
 */

/** `waiting → searching ⇄ held → settled`; `spent` can be extended; `withdrawn` and `broken` are endings. */
export const SEARCH_STATES = ['waiting', 'searching', 'held', 'settled', 'spent', 'withdrawn', 'broken'] as const;
export type SearchState = (typeof SEARCH_STATES)[number];

/** Which state may follow which. A state that is not a key's value cannot be reached from it. */
export const SEARCH_TRANSITIONS: Readonly<Record<SearchState, readonly SearchState[]>> = {
  waiting: ['searching', 'held', 'withdrawn', 'broken', 'settled', 'spent'],
  searching: ['waiting', 'held', 'settled', 'spent', 'withdrawn', 'broken'],
  held: ['waiting', 'withdrawn'],
  spent: ['waiting', 'withdrawn'],
  settled: [],
  withdrawn: [],
  broken: [],
};

/** What a search is doing inside `searching`. */
export const SEARCH_PHASES = ['choosing', 'listing', 'assembling', 'checking'] as const;
export type SearchPhase = (typeof SEARCH_PHASES)[number];

/** Three outcomes, never two: `open` is not a no. */
export const VERDICTS = ['embeds', 'excluded', 'open'] as const;
export type Verdict = (typeof VERDICTS)[number];

export const GROUNDS = ['embedding', 'exhaustion', 'dimension', 'determinant', 'hilbert', 'column'] as const;
export type Ground = (typeof GROUNDS)[number];

export const ROLES = ['admin', 'researcher', 'reader'] as const;
export type Role = (typeof ROLES)[number];

/** Access to one study: the lead shares it, a coauthor asks in it, a reader looks. */
export const ACCESSES = ['lead', 'coauthor', 'reader'] as const;
export type Access = (typeof ACCESSES)[number];

export const STATION_STATES = ['working', 'finishing', 'standing by', 'not heard'] as const;
export type StationState = (typeof STATION_STATES)[number];

/** Why a search that could run does not. */
export const WAIT_REASONS = ['turn', 'allowance', 'pool'] as const;
export type WaitReason = (typeof WAIT_REASONS)[number];
