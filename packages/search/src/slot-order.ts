/**
 * In which order the columns of a node are filled for the next row. A row of the node whose columns are nearly all
 * filled leaves no choice for the last of them, so columns are taken row by row: first the rows that the new one
 * must meet, then the rows that touch what was filled, the one with fewest open columns first.
 */
import type { Columns } from './columns.ts';

/** Above this many rows the row with fewest open columns is not looked for: first come, first served. */
const CAREFUL_ROWS = 48;

/** What `arrange` needs while it runs: one for all orders, since a ladder of 2,000 depths would hold the square of that. */
class Scratch {
  taken = new Uint8Array(16);
  open = new Float64Array(16);
  queued = new Uint8Array(16);
  readonly queue: number[] = [];
  readonly users: number[][] = [];

  reserve(classes: number, depth: number): void {
    if (classes > this.taken.length) this.taken = new Uint8Array(classes * 2);
    if (depth > this.open.length) {
      this.open = new Float64Array(depth * 2);
      this.queued = new Uint8Array(depth * 2);
    }
    while (this.users.length < depth) this.users.push([]);
  }
}

const scratch = new Scratch();

export class SlotOrder {
  /** Classes in the order in which they are filled; `count` of them. */
  classes = new Int32Array(16);

  /** @param target inner products of the new row with rows 0 … depth − 1 */
  arrange(columns: Columns, depth: number, target: Float64Array): void {
    scratch.reserve(columns.count, depth);
    if (columns.count > this.classes.length) this.classes = new Int32Array(columns.count * 2);
    const { taken, open, queued, users, queue } = scratch;
    taken.fill(0, 0, columns.count);
    queued.fill(0, 0, depth);
    for (let i = 0; i < depth; i += 1) {
      open[i] = 0;
      users[i]!.length = 0;
    }
    for (let c = 0; c < columns.count; c += 1) {
      for (let e = columns.start[c]!; e < columns.start[c + 1]!; e += 1) {
        const row = columns.rows[e]!;
        open[row]! += columns.mult[c]!;
        users[row]!.push(c);
      }
    }
    queue.length = 0;
    for (let i = depth - 1; i >= 0; i -= 1) if (target[i] !== 0) this.enqueue(i);
    let filled = 0;
    let next = depth - 1;
    while (filled < columns.count) {
      while (queue.length === 0) {
        if (!queued[next]) this.enqueue(next);
        next -= 1;
      }
      const row = this.dequeue(depth);
      for (const c of users[row]!) {
        if (taken[c]) continue;
        taken[c] = 1;
        this.classes[filled] = c;
        filled += 1;
        for (let e = columns.start[c]!; e < columns.start[c + 1]!; e += 1) {
          const other = columns.rows[e]!;
          open[other]! -= columns.mult[c]!;
          if (!queued[other]) this.enqueue(other);
        }
      }
    }
  }

  private enqueue(row: number): void {
    scratch.queued[row] = 1;
    scratch.queue.push(row);
  }

  private dequeue(depth: number): number {
    const { queue, open } = scratch;
    if (depth > CAREFUL_ROWS) return queue.shift()!;
    let best = 0;
    for (let q = 1; q < queue.length; q += 1) if (open[queue[q]!]! < open[queue[best]!]!) best = q;
    return queue.splice(best, 1)[0]!;
  }
}
