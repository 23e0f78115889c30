/**
 * The list of a certificate while it is written: found orbits go in one by one, become embeddings with their tests, are
 * counted, and leave as chunks. Nothing of a large list is held here but the hash of each chunk.
 */
import { CertificateWriter, type CertificateParts, type WrittenFile } from '@palmette/certificate';
import { TestsOnList } from '@palmette/lattice';
import { embeddingMatrix, orbitSize, type FoundOrbit, type Plan } from '@palmette/search';
import { sha256, type Understood } from './understand.ts';

/** Takes a chunk of a large list; it is not held any more when this returns. */
export type KeepChunk = (chunk: Uint8Array) => void;

export class ListWriter {
  orbits = 0n;
  total = 0n;
  private readonly writer: CertificateWriter;
  private readonly tests: TestsOnList;

  /**
   * @param width columns of every embedding; null: each has its own
   * @param dimension as the claim names it
   */
  constructor(
    private readonly u: Understood,
    private readonly width: number | null,
    dimension: number | null,
    keep: KeepChunk,
  ) {
    this.writer = new CertificateWriter(sha256, { keep, oneObject: u.oneLine });
    this.tests = new TestsOnList({ lattice: u.lattice, dimension, tests: u.canonical.tests });
  }

  /** Orbits in the order of the tree. */
  take(plan: Plan, found: Iterable<FoundOrbit>, atMost = Number.POSITIVE_INFINITY): void {
    let left = atMost;
    for (const orbit of found) {
      this.add(plan, orbit);
      left -= 1;
      if (left === 0) return;
    }
  }

  private add(plan: Plan, orbit: FoundOrbit): void {
    const { rows } = embeddingMatrix(plan, orbit, this.u.reduced.basis);
    const columns = rows[0]?.length ?? 0;
    const zeros = this.width === null ? 0 : this.width - columns;
    const size = orbitSize(orbit, columns + zeros);
    this.writer.add({ rows, zeros, orbitSize: size, tests: this.tests.take({ rows, zeros }) });
    this.orbits += 1n;
    this.total += size;
  }

  /** @param complete whether these are all the embeddings there are */
  finish(parts: Omit<CertificateParts, 'question' | 'tests'>, complete: boolean): WrittenFile {
    return this.writer.finish({ ...parts, question: { ...this.u.canonical }, tests: this.tests.overall(complete) });
  }
}
