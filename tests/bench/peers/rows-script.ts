/**
 * Peer 1: backtracking by rows, as a practitioner writes it. Rows in greedy order (most neighbours already placed, then the
 * smallest norm); each new row is listed entry by entry; columns that agree so far get non-increasing entries and columns that
 * are zero so far non-negative ones, so that each orbit of signed permutations is met once; a branch is cut where an inner
 * product cannot be reached any more by Cauchy–Schwarz. Reads a problem on standard input; prints what it found.
 */
import { readFileSync } from 'node:fs';

interface Input {
  readonly gram: readonly (readonly number[])[];
  readonly dimension: number;
  readonly scope: 'one' | 'all';
}

const { gram, dimension: n, scope } = JSON.parse(readFileSync(0, 'utf8')) as Input;
const rank = gram.length;
const order = greedyOrder();
const q = order.map((v) => order.map((w) => gram[v]![w]!));
const rows: number[][] = [];
/** tails[i][j]: norm of row i from column j on. */
const tails: number[][] = [];
let nodes = 0;
let orbits = 0;
let witness: number[][] | null = null;

function greedyOrder(): number[] {
  const placed: number[] = [];
  const links = (v: number) => placed.filter((w) => gram[v]![w] !== 0).length;
  while (placed.length < rank) {
    const left = gram.map((_, v) => v).filter((v) => !placed.includes(v));
    placed.push(left.reduce((a, b) => ((links(b) - links(a) || gram[a]![a]! - gram[b]![b]!) > 0 ? b : a)));
  }
  return placed;
}

/** Places row i; true when the search may stop. */
function place(i: number): boolean {
  if (i === rank) {
    orbits += 1;
    witness ??= rows.map((row) => [...row]);
    return scope === 'one';
  }
  const row = new Array<number>(n).fill(0);
  /** same[j]: columns j − 1 and j agree in all rows above. */
  const same = row.map((_, j) => j > 0 && rows.every((above) => above[j - 1] === above[j]));
  const zero = row.map((_, j) => rows.every((above) => above[j] === 0));
  const wanted = q[i]!.slice(0, i);
  return entry(0, q[i]![i]!);

  function entry(j: number, norm: number): boolean {
    if (j === n) {
      if (norm !== 0) return false;
      nodes += 1;
      rows.push(row);
      tails.push(tailNorms(row));
      const stop = place(i + 1);
      rows.pop();
      tails.pop();
      return stop;
    }
    const most = Math.floor(Math.sqrt(norm));
    const high = same[j] ? Math.min(most, row[j - 1]!) : most;
    for (let x = high; x >= (zero[j] ? 0 : -most); x -= 1) {
      const left = norm - x * x;
      let reachable = true;
      for (let k = 0; k < i; k += 1) {
        wanted[k]! -= x * rows[k]![j]!;
        if (wanted[k]! * wanted[k]! > left * tails[k]![j + 1]!) reachable = false;
      }
      row[j] = x;
      const stop = reachable && entry(j + 1, left);
      for (let k = 0; k < i; k += 1) wanted[k]! += x * rows[k]![j]!;
      if (stop) return true;
    }
    row[j] = 0;
    return false;
  }
}

function tailNorms(row: readonly number[]): number[] {
  const tail = new Array<number>(n + 1).fill(0);
  for (let j = n - 1; j >= 0; j -= 1) tail[j] = tail[j + 1]! + row[j]! * row[j]!;
  return tail;
}

const before = process.cpuUsage();
place(0);
const { user, system } = process.cpuUsage(before);
const back = witness === null ? null : order.map((_, v) => witness![order.indexOf(v)]!);
console.log(JSON.stringify({ orbits, nodes, cpuSeconds: (user + system) / 1e6, witness: back }));
