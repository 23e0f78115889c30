/**
 * The tree of frames (FORMAT.md, F0, F1, F2). For n = r and r + 1 a node is a set of mutually orthogonal vectors of one list; its
 * candidates are orthogonal to all of them. For n = r + 2 columns of W are chosen first, until one leaves full rank; below it the tree is
 * that of n = r + 1 for what is left.
 *
 * Cuts beside those of `vector-ladder.ts`: too few candidates for the vectors that are missing (each is used once); and until a vector with
 * y ≠ 0 is chosen, only y > 0 is chosen. *Proof of the last.* Up to there candidates come in mirrored pairs side by side, so the mirror image
 * of a frame is met at the same node; unless the frame holds both (c, y) and (c, −y) of the first such pair, exactly one of the two images
 * begins with y > 0. If it holds both, both images do, and the one that is first in order is kept.
 */
import type { AdmissibleColumns } from './admissible-columns.ts';
import type { DualForm } from './dual-form.ts';
import { extendedFrameList, frameListUnder, unitFrameList, type FrameList } from './frame-list.ts';
import { Orthogonality } from './orthogonality.ts';
import { underColumn, type UnderColumn } from './under-column.ts';
import { allPlaces, emptyLevel, VectorLadder, type VectorLevel } from './vector-ladder.ts';

interface FramesLevel extends VectorLevel {
  /** The list of the frame; null while columns of W are chosen (n = r + 2). */
  list: FrameList | null;
  /** Vectors still to be chosen. */
  missing: number;
  /** A vector with y ≠ 0 was chosen. */
  settled: boolean;
}

/** The candidates at the root, made once for all runs of a plan. */
export interface FrameRoot {
  readonly form: DualForm;
  readonly columns: AdmissibleColumns;
  readonly list: FrameList | null;
}

/** @param excess n − r: 0, 1 or 2 */
export function frameRoot(form: DualForm, columns: AdmissibleColumns, excess: number): FrameRoot {
  const list = excess === 0 ? unitFrameList(columns) : excess === 1 ? extendedFrameList(form, columns) : null;
  return { form, columns, list };
}

export class FramesLadder extends VectorLadder<FramesLevel> {
  private readonly orthogonality: Orthogonality;
  private readonly under: UnderColumn | null;

  constructor(
    private readonly root: FrameRoot,
    dimension: number,
  ) {
    super(root.form.rank, dimension);
    this.orthogonality = new Orthogonality(root.form);
    this.under = root.list === null ? underColumn(root.form, root.columns) : null;
    const level = this.level(0);
    level.list = root.list;
    level.entries = (root.list ?? root.columns).entries;
    level.count = (root.list ?? root.columns).count;
    level.candidates = allPlaces(level.count);
    level.missing = dimension;
    for (let i = 0; i < this.rank; i += 1) level.rest[i] = Number(root.form.gram[i]![i]!);
  }

  protected newLevel(): FramesLevel {
    return { ...emptyLevel(this.rank), list: null, missing: 0, settled: false };
  }

  protected branchOn(level: FramesLevel): void {
    if (level.list === null) return this.branchOnFewest(level, false);
    if (level.count < level.missing) return;
    this.branchOnFewest(level, true);
    // all of W is covered: what is missing is the vector with c = 0
    if (level.rest.every((x) => x === 0)) this.branchOnAll(level);
    const { y } = level.list;
    if (y === null || level.settled) return;
    let kept = 0;
    for (let k = 0; k < level.children; k += 1) {
      const place = level.branch[k]!;
      if (y[level.candidates[place]!]! < 0) continue;
      level.branch[kept] = place;
      kept += 1;
    }
    level.children = kept;
  }

  private branchOnAll(level: FramesLevel): void {
    if (level.branch.length < level.count) level.branch = new Int32Array(level.count);
    for (let p = 0; p < level.count; p += 1) level.branch[p] = p;
    level.children = level.count;
    level.row = 0;
  }

  protected completes(level: FramesLevel, chosen: number): boolean {
    if (level.list !== null) return level.missing === 1;
    for (let i = 0, at = chosen * this.rank; i < this.rank; i += 1) {
      const x = level.entries[at + i]!;
      if (level.rest[i] !== x * x) return false;
    }
    return true;
  }

  protected writeChild(from: FramesLevel, to: FramesLevel, chosen: number): void {
    to.missing = from.missing - 1;
    if (from.list === null) return this.writeUnderColumn(from, to, chosen);
    to.list = from.list;
    to.settled = from.settled || (from.list.y !== null && from.list.y[chosen] !== 0);
    this.orthogonality.aim(from.list, chosen);
    let count = 0;
    for (let p = 0; p < from.count; p += 1) {
      const candidate = from.candidates[p]!;
      if (candidate === chosen || this.isOut(from, p) || !this.orthogonality.to(candidate)) continue;
      to.candidates[count] = candidate;
      count += 1;
    }
    to.count = count;
  }

  /** F2: the column leaves full rank (F(a) > 0) and a frame is looked for, or one rank less and another column is chosen. */
  private writeUnderColumn(from: FramesLevel, to: FramesLevel, chosen: number): void {
    const { form, columns } = this.root;
    const under = this.under!;
    const unit = under.aim(chosen);
    let count = 0;
    for (let p = 0; p < from.count; p += 1) {
      if (this.isOut(from, p)) continue;
      const candidate = from.candidates[p]!;
      if (unit && !under.meets(candidate)) continue;
      to.candidates[count] = candidate;
      count += 1;
    }
    to.list = unit ? null : frameListUnder(form, columns, to.candidates, count, under);
    to.settled = false;
    this.steps += count;
    if (to.list === null) {
      to.count = count;
      return;
    }
    to.entries = to.list.entries;
    to.count = to.list.count;
    to.candidates = allPlaces(to.count);
  }

  protected repeated(depth: number): boolean {
    const leaf = this.levels[depth]!;
    const { list } = leaf;
    if (list?.mirror == null) return false;
    const frame: number[] = [];
    let first = -1;
    for (let k = depth; k >= 0 && this.levels[k]!.list === list; k -= 1) {
      const vector = this.chosen(this.levels[k]!);
      frame.push(vector);
      if (list.y![vector] !== 0) first = vector;
    }
    const { mirror } = list;
    if (first < 0 || mirror[first] === first || !frame.includes(mirror[first]!)) return false;
    const ascending = (a: number, b: number) => a - b;
    const image = frame.map((v) => mirror[v]!).sort(ascending);
    frame.sort(ascending);
    const differs = frame.findIndex((v, i) => v !== image[i]);
    return differs >= 0 && image[differs]! < frame[differs]!;
  }
}
