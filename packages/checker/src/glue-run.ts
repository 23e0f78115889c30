/** Runs over the lattices of a tree of frames by gluing: one after the other, Γ is Z^n or not. Its `nodes` are the lattices, told by the run that begins at the first. */
import { listColumns } from './dual-columns.ts';
import { dualForm } from './dual-form.ts';
import type { Matrix } from './arithmetic.ts';
import { gluedLattices } from './gluing.ts';
import { shortGram } from './short-basis.ts';
import type { CheckInterval, CheckRun, CheckTree } from './tree.ts';

const prepared = new WeakMap<CheckTree, Matrix[]>();

function latticesOf(tree: CheckTree): Matrix[] {
  const known = prepared.get(tree);
  if (known !== undefined) return known;
  const lattices = gluedLattices(shortGram(tree.gram), tree.primes!, tree.dimension! - tree.gram.length);
  prepared.set(tree, lattices);
  return lattices;
}

/** 2n vectors of norm 1? They are the admissible columns of the inverse Gram matrix, which is integral: det Γ = 1. */
export function isCubic(gram: Matrix): boolean {
  const form = dualForm(shortGram(gram));
  const inverse = gram.map((_, i) => gram.map((__, j) => BigInt(form.adjugate[i * form.rank + j]!)));
  return listColumns(dualForm(inverse), 'unit').count === form.rank;
}

export class GlueRun implements CheckRun {
  orbits = 0n;
  private at: number;
  private begun = false;
  private readonly lattices: Matrix[];
  private readonly end: number;

  constructor(
    tree: CheckTree,
    private readonly interval: CheckInterval,
    checkpoint?: string,
  ) {
    this.lattices = latticesOf(tree);
    this.at = interval.from[0] ?? 0;
    this.end = Math.min(this.lattices.length, interval.to?.[0] ?? this.lattices.length);
    if (checkpoint === undefined) return;
    const saved = JSON.parse(checkpoint) as { at: number; orbits: string; begun: boolean };
    this.at = saved.at;
    this.orbits = BigInt(saved.orbits);
    this.begun = saved.begun;
  }

  get nodes(): bigint {
    return this.begun && this.interval.from.length === 0 ? BigInt(this.lattices.length) : 0n;
  }

  advance(count: number): 'more' | 'done' {
    this.begun = true;
    for (let left = Math.max(1, Math.floor(count / 16)); left > 0; left -= 1) {
      if (this.at >= this.end) return 'done';
      if (isCubic(this.lattices[this.at]!)) this.orbits += 1n;
      this.at += 1;
    }
    return this.at >= this.end ? 'done' : 'more';
  }

  checkpoint(): string {
    return JSON.stringify({ at: this.at, orbits: String(this.orbits), begun: this.begun });
  }

  get shareDone(): number {
    const first = this.interval.from[0] ?? 0;
    return this.end <= first ? 1 : (this.at - first) / (this.end - first);
  }
}

export function splitGlued(tree: CheckTree, pieces: number): CheckInterval[] {
  const count = latticesOf(tree).length;
  const stride = Math.max(1, Math.ceil(count / pieces));
  const starts: number[][] = [[]];
  for (let k = stride; k < count; k += stride) starts.push([k]);
  return starts.map((from, i) => ({ from, to: starts[i + 1] ?? null }));
}
