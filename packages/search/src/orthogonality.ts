/**
 * Which vectors of a frame list are orthogonal to one of them: aimed at one, asked about many. T(c, c') + y·y' = 0, and under a column a
 * F(a)·T(c, c') + T(a, c)·T(a, c') + d·y·y' = 0: numbers of size at most 2d². In doubles for direct forms, else modulo enough primes.
 */
import { apply, dot, roundedQuotient, type DualForm, type Residues } from './dual-form.ts';
import type { FrameList } from './frame-list.ts';

export class Orthogonality {
  private readonly image: Float64Array;
  private readonly images: Float64Array[];
  private list!: FrameList;
  private vector = 0;
  private y = 0;
  constructor(private readonly form: DualForm) {
    this.image = new Float64Array(form.rank);
    this.images = form.residues.map(() => new Float64Array(form.rank));
  }

  aim(list: FrameList, vector: number): void {
    this.list = list;
    this.vector = vector;
    this.y = list.y === null ? 0 : list.y[vector]!;
    const { rank, direct } = this.form;
    const at = vector * rank;
    if (direct !== null) return apply(direct, list.entries, at, rank, this.image);
    this.form.residues.forEach(({ adjugate, modulus }, i) => {
      const image = this.images[i]!;
      apply(adjugate, list.entries, at, rank, image);
      for (let j = 0; j < rank; j += 1) image[j]! %= modulus;
    });
  }

  to(vector: number): boolean {
    const { form, list } = this;
    if (form.direct === null) {
      for (let i = 0; i < form.residues.length; i += 1) if (!this.vanishes(form.residues[i]!, i, vector)) return false;
      return true;
    }
    const y = list.y === null ? 0 : this.y * list.y[vector]!;
    const t = dot(this.image, list.entries, vector * form.rank, form.rank);
    if (list.under === null) return t + y === 0;
    const { gap, products } = list.under.direct!;
    return roundedQuotient(gap, t, products[this.vector]!, products[vector]!, Number(form.determinant)) + y === 0;
  }

  private vanishes({ modulus }: Residues, i: number, vector: number): boolean {
    const { list, form } = this;
    const t = dot(this.images[i]!, list.entries, vector * form.rank, form.rank) % modulus;
    const y = list.y === null ? 0 : ((this.y % modulus) * (list.y[vector]! % modulus)) % modulus;
    if (list.under === null) return (t + y) % modulus === 0;
    const { gap, determinant, products } = list.under.residues[i]!;
    const under = ((gap * t) % modulus) + ((products[this.vector]! * products[vector]!) % modulus);
    return (under + ((determinant * y) % modulus)) % modulus === 0;
  }
}
