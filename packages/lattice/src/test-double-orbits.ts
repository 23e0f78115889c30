/**
 * Double orbits: the orbits of a complete list up to Aut of the lattice as well. An automorphism X takes an embedding A
 * to X·A, so the classes are those of the orbits joined by a set of generators (union–find).
 *
 * An orbit is kept as the multiset of its columns, each column up to sign and in the basis of the reduced lattice, by
 * number; a generator then acts on the few columns that occur, not on whole matrices.
 */
import {
  identityMatrix,
  isIdentity,
  multiply,
  transpose,
  type BigMatrix,
  type ReadonlyBigMatrix,
} from '@palmette/exact';
import { BeyondBound } from './automorphism-bounds.ts';
import { automorphismGroup } from './automorphisms.ts';
import { reducedBasis, type Lattice, type ReducedBasis } from './build.ts';
import type { ListedEmbedding, TestAnswer } from './tests-on-list.ts';

/** Bounds on the list; the group has its own. */
const MAX = {
  orbits: 200_000,
  /** Columns kept, over all orbits. */
  columns: 2_000_000,
  /** Columns of all orbits times generators. */
  moves: 50_000_000,
} as const;

export class DoubleOrbitTest {
  private readonly reduced: ReducedBasis;
  private readonly columns = new ColumnTable();
  /** For each orbit the numbers of its columns, ascending, as text. */
  private readonly orbits = new Map<string, number>();
  private taken = 0;
  private places = 0;

  constructor(private readonly lattice: Lattice) {
    this.reduced = reducedBasis(lattice);
  }

  take({ rows }: ListedEmbedding): void {
    const no = this.taken;
    this.taken += 1;
    if (this.tooMany()) return;
    const numbers = transpose(this.inReducedBasis(rows)).map((column) => this.columns.number(column));
    this.places += numbers.length;
    this.orbits.set(multisetText(numbers), no);
    if (this.tooMany()) this.orbits.clear();
  }

  answer(complete: boolean): TestAnswer {
    if (!complete) return { undecided: true, reason: 'the list is not complete' };
    if (this.taken === 0) return { applies: false, reason: 'there is no embedding' };
    if (this.tooMany())
      return {
        undecided: true,
        reason: `${this.taken} embeddings: more than ${MAX.orbits}, or than ${MAX.columns} columns in all`,
      };
    const group = automorphismGroup(this.reduced.gram);
    if (group instanceof BeyondBound) return { undecided: true, reason: group.message };
    const moving = group.generators.filter((x) => !isNegative(x));
    if (this.places * moving.length > MAX.moves)
      return {
        undecided: true,
        reason: `${moving.length} generators on ${this.places} columns, above ${MAX.moves} moves`,
      };
    const classes = new Classes(this.taken);
    for (const generator of moving) this.join(classes, generator);
    const representatives = classes.leasts();
    return {
      groupOrder: group.order.toString(),
      count: representatives.length.toString(),
      representatives,
      generators: group.generators.map((x) => this.inSourceBasis(x).map((row) => row.map(String))),
    };
  }

  private tooMany(): boolean {
    return this.taken > MAX.orbits || this.places > MAX.columns;
  }

  private join(classes: Classes, generator: ReadonlyBigMatrix): void {
    const image = this.columns.imagesUnder(generator);
    for (const [text, no] of this.orbits) {
      const target = this.orbits.get(multisetText(text === '' ? [] : text.split(',').map((c) => image[Number(c)]!)));
      if (target === undefined) throw new Error(`an automorphism takes embedding ${no} out of the complete list`);
      classes.join(no, target);
    }
  }

  private inReducedBasis(rows: ReadonlyBigMatrix): BigMatrix {
    const { basis } = this.reduced;
    if (basis === null) return rows.map((row) => [...row]);
    return multiply(transpose(basis.matrix).slice(0, this.lattice.rank), rows);
  }

  /** N × N: the automorphism on the reduced lattice, the identity on the radical. */
  private inSourceBasis(x: ReadonlyBigMatrix): BigMatrix {
    const { basis } = this.reduced;
    if (basis === null) return x.map((row) => [...row]);
    const wide = identityMatrix(basis.matrix.length);
    x.forEach((row, i) => row.forEach((value, j) => (wide[i]![j] = value)));
    return multiply(multiply(transpose(basis.inverse), wide), transpose(basis.matrix));
  }
}

/** −1 fixes every orbit. */
function isNegative(x: ReadonlyBigMatrix): boolean {
  return isIdentity(x.map((row) => row.map((value) => -value)));
}

function multisetText(numbers: readonly number[]): string {
  return numbers.toSorted((a, b) => a - b).join();
}

/** The columns that occur, up to sign, numbered as they come. */
class ColumnTable {
  private readonly numbers = new Map<string, number>();
  private readonly list: bigint[][] = [];

  number(column: readonly bigint[]): number {
    const lead = column.find((x) => x !== 0n);
    const normal = lead !== undefined && lead < 0n ? column.map((x) => -x) : [...column];
    const text = normal.join();
    const known = this.numbers.get(text);
    if (known !== undefined) return known;
    this.numbers.set(text, this.list.length);
    this.list.push(normal);
    return this.list.length - 1;
  }

  /** The number of X·c for each column c that was there. */
  imagesUnder(x: ReadonlyBigMatrix): number[] {
    const across = transpose(x);
    return multiply(this.list, across).map((column) => this.number(column));
  }
}

/** Union–find; the root of a class is its least member. */
class Classes {
  private readonly parent: Int32Array;

  constructor(size: number) {
    this.parent = Int32Array.from({ length: size }, (_, i) => i);
  }

  join(i: number, j: number): void {
    const [a, b] = [this.root(i), this.root(j)];
    this.parent[Math.max(a, b)] = Math.min(a, b);
  }

  leasts(): number[] {
    return Array.from(this.parent.keys()).filter((i) => this.parent[i] === i);
  }

  private root(start: number): number {
    let i = start;
    while (this.parent[i] !== i) {
      this.parent[i] = this.parent[this.parent[i]!]!;
      i = this.parent[i]!;
    }
    return i;
  }
}
