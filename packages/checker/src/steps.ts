/** A slice of work: how many steps may still be made before a listing has to pause. */
export interface Steps {
  left: number;
}

/** What a listing answers: a child stands, there is none any more, or the slice is used up. */
export const END = 0;
export const FOUND = 1;
export const PAUSED = 2;
export type Step = typeof END | typeof FOUND | typeof PAUSED;
