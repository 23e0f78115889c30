/** The tree of glued lattices: the root has one child for each, a leaf where the lattice is Z^n and a node without children elsewhere. */
import { cubeOf } from './cube.ts';
import type { FoundOrbit } from './found.ts';
import type { Gluing } from './gluing.ts';
import type { Ladder } from './ladder.ts';
import { LISTED, type Listed } from './listing.ts';

/** Listing steps that stand for the reduction of one lattice, for each cube of its rank. */
const STEPS_PER_CUBE = 2;

export class GlueLadder implements Ladder {
  steps = 0;
  private at = -1;
  private known: { readonly at: number; readonly orbit: FoundOrbit | null } | null = null;
  constructor(
    private readonly gluing: Gluing,
    private readonly dimension: number,
  ) {}

  begin(depth: number): void {
    if (depth === 0) this.at = -1;
    this.steps += 1;
  }

  next(depth: number): Listed {
    this.steps += 1;
    if (depth > 0 || this.at + 1 >= this.gluing.glued.length) return LISTED.done;
    this.at += 1;
    this.steps += STEPS_PER_CUBE * this.dimension ** 3;
    return LISTED.found;
  }

  state(depth: number): number {
    return depth === 0 ? this.at : -1;
  }

  restore(depth: number, state: unknown): void {
    if (depth === 0) this.at = state as number;
  }

  childIsLeaf(): boolean {
    return this.cube() !== null;
  }

  descend(): void {
    this.steps += 1;
  }

  orbit(): FoundOrbit {
    return this.cube()!;
  }

  private cube(): FoundOrbit | null {
    if (this.known?.at !== this.at) this.known = { at: this.at, orbit: cubeOf(this.gluing.glued[this.at]!) };
    return this.known!.orbit;
  }

  get bytes(): number {
    return this.gluing.glued.reduce((sum, { gram }) => sum + 32 * gram.length * gram.length, 0);
  }
}
