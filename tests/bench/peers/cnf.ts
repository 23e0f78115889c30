/** Clauses under construction: fresh variables, gates by Tseitin's clauses, adders. Literals are non-zero integers. */

export class Cnf {
  variables = 0;
  clauses = 0;
  readonly #text: string[] = [];
  readonly #true: number;

  constructor() {
    this.#true = this.fresh();
    this.add(this.#true);
  }

  fresh(): number {
    return (this.variables += 1);
  }

  get true(): number {
    return this.#true;
  }

  add(...literals: number[]): void {
    this.clauses += 1;
    this.#text.push(literals.join(' '));
  }

  and(a: number, b: number): number {
    const out = this.fresh();
    this.add(-out, a);
    this.add(-out, b);
    this.add(out, -a, -b);
    return out;
  }

  or(a: number, b: number): number {
    return -this.and(-a, -b);
  }

  xor(a: number, b: number): number {
    const out = this.fresh();
    this.add(-out, a, b);
    this.add(-out, -a, -b);
    this.add(out, -a, b);
    this.add(out, a, -b);
    return out;
  }

  /** At least two of three. */
  majority(a: number, b: number, c: number): number {
    const out = this.fresh();
    for (const [x, y] of [
      [a, b],
      [a, c],
      [b, c],
    ] as const) {
      this.add(out, -x, -y);
      this.add(-out, x, y);
    }
    return out;
  }

  /** Makes Σ 2^k · (bits of weight k) equal to a constant: full and half adders, column by column. */
  sumEquals(bits: readonly (readonly number[])[], constant: number): void {
    const columns = bits.map((column) => [...column]);
    for (let k = 0; k < columns.length || constant >> k > 0; k += 1) {
      const column = (columns[k] ??= []);
      const carry = () => (columns[k + 1] ??= []);
      while (column.length > 2) {
        const [a, b, c] = column.splice(0, 3) as [number, number, number];
        column.push(this.xor(this.xor(a, b), c));
        carry().push(this.majority(a, b, c));
      }
      if (column.length === 2) {
        const [a, b] = column.splice(0, 2) as [number, number];
        column.push(this.xor(a, b));
        carry().push(this.and(a, b));
      }
      const wanted = ((constant >> k) & 1) === 1;
      if (column.length === 1) this.add(wanted ? column[0]! : -column[0]!);
      else if (wanted) this.add();
    }
  }

  dimacs(): string {
    return `p cnf ${this.variables} ${this.clauses}\n${this.#text.map((c) => `${c} 0`).join('\n')}\n`;
  }
}
