/**
 * In which order the columns of a node are filled for the next row. A row of the node whose columns are nearly all
 * filled leaves no choice for the last of them, so columns are taken row by row: first the rows that the new one
 * must meet, then the rows that touch what was filled, the one with fewest open columns first.
 */
import type { Columns } from './columns.ts';

/** Above this many rows the row with fewest open columns is not looked for: first come, first served. */
const CAREFUL_ROWS = 48;

export class SlotOrder {
  /** Classes in the order in which they are filled; `count` of them. */
  classes = new Int32Array(16);
  private taken = new Uint8Array(16);
  private open = new Float64Array(16);
  private queued = new Uint8Array(16);
  private queue: number[] = [];
  private users: number[][] = [];

  /** @param target inner products of the new row with rows 0 … depth − 1 */
  arrange(columns: Columns, depth: number, target: Float64Array): void {
    this.reserve(columns.count, depth);
    const { taken, open, queued, users, queue } = this;
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
    this.queued[row] = 1;
    this.queue.push(row);
  }

  private dequeue(depth: number): number {
    if (depth > CAREFUL_ROWS) return this.queue.shift()!;
    let best = 0;
    for (let q = 1; q < this.queue.length; q += 1)
      if (this.open[this.queue[q]!]! < this.open[this.queue[best]!]!) best = q;
    return this.queue.splice(best, 1)[0]!;
  }

  private reserve(classes: number, depth: number): void {
    if (classes > this.classes.length) {
      this.classes = new Int32Array(classes * 2);
      this.taken = new Uint8Array(classes * 2);
    }
    if (depth > this.open.length) {
      this.open = new Float64Array(depth * 2);
      this.queued = new Uint8Array(depth * 2);
    }
    while (this.users.length < depth) this.users.push([]);
  }
}
