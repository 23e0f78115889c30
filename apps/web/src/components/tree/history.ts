/** Undo and redo: what was, what is, what was taken back. */

export interface History<T> {
  readonly past: readonly T[];
  readonly now: T;
  readonly future: readonly T[];
  /** Steps with the same mark one after the other are one step: the letters of one weight, the way of one drag. */
  readonly mark: string;
}

/** Steps that can be taken back. */
const KEPT = 200;

export function begin<T>(now: T): History<T> {
  return { past: [], now, future: [], mark: '' };
}

export function step<T>(history: History<T>, next: T, mark = ''): History<T> {
  if (next === history.now) return history;
  const past = mark !== '' && mark === history.mark ? history.past : [...history.past, history.now].slice(-KEPT);
  return { past, now: next, future: [], mark };
}

export function undo<T>(history: History<T>): History<T> {
  const before = history.past.at(-1);
  if (before === undefined) return history;
  return { past: history.past.slice(0, -1), now: before, future: [history.now, ...history.future], mark: '' };
}

export function redo<T>(history: History<T>): History<T> {
  const [after, ...rest] = history.future;
  if (after === undefined) return history;
  return { past: [...history.past, history.now], now: after, future: rest, mark: '' };
}
