/** The list: each embedding multiplied again, told apart from the others up to symmetry, its orbit counted. FORMAT.md, section 6. */
import { times, turned, type Matrix } from './arithmetic.ts';
import type { CertificateFile } from './file.ts';
import { KeySet } from './key-set.ts';
import { readIntegerMatrix, type CheckedLattice } from './lattice.ts';
import { countOf, objectOf, Rejection, stringIntegerOf, type Json } from './reading.ts';
import { sha256Hex } from './sha256.ts';

export interface CheckedList {
  readonly orbits: bigint;
  readonly total: bigint;
  /** Names of tests that the embeddings record and that this checker does not verify. */
  readonly unverifiedTests: ReadonlySet<string>;
}

const DENSE_ENTRIES = 250_000;

/** @param dimension n, or null for target any: each embedding in its own width, without zero columns */
export function checkEmbeddings(file: CertificateFile, lattice: CheckedLattice, dimension: number | null): CheckedList {
  const size = lattice.gram.length;
  const seen = new KeySet();
  const unverifiedTests = new Set<string>();
  let [orbits, total] = [0n, 0n];
  for (const { place, value } of file.embeddings()) {
    const o = objectOf(value, place, ['matrix', 'zeroColumns?', 'orbitSize', 'tests']);
    const { columns, zeros } = readColumns(o['matrix'], o['zeroColumns'], place, size, dimension);
    checkProduct(turned(columns, size), lattice.gram, place);
    const normal = columns.map(normalColumn).sort();
    const key = sha256Hex(new TextEncoder().encode(normal.join('|')));
    if (!seen.add(key)) throw new Rejection(place, 'the same orbit stands in the list before');
    const orbitSize = countOrbit(normal, zeros);
    if (stringIntegerOf(o['orbitSize'], `${place}/orbitSize`) !== orbitSize)
      throw new Rejection(`${place}/orbitSize`, `expected ${orbitSize}`);
    for (const name of testNames(o['tests'], `${place}/tests`)) unverifiedTests.add(name);
    orbits += 1n;
    total += orbitSize;
  }
  return { orbits, total, unverifiedTests };
}

/** Nonzero columns and the number of zero columns. */
function readColumns(
  value: Json | undefined,
  zeroColumns: Json | undefined,
  place: string,
  size: number,
  dimension: number | null,
): { columns: bigint[][]; zeros: number } {
  const left = zeroColumns === undefined ? 0 : countOf(zeroColumns, `${place}/zeroColumns`);
  if (size === 0) {
    if (!Array.isArray(value) || value.length > 0) throw new Rejection(`${place}/matrix`, 'expected no rows at rank 0');
    return { columns: [], zeros: dimension ?? 0 };
  }
  const matrix = readIntegerMatrix(value, `${place}/matrix`, size, null, size);
  const width = matrix[0]!.length;
  if (dimension !== null && width + left !== dimension)
    throw new Rejection(`${place}/matrix`, `expected ${dimension} columns, found ${width + left}`);
  if ((zeroColumns !== undefined) !== size * (width + left) > DENSE_ENTRIES)
    throw new Rejection(`${place}/zeroColumns`, 'zero columns are left out above 250,000 entries, and only there');
  const all = turned(matrix, width);
  const columns = all.filter((column) => column.some((x) => x !== 0n));
  const zeros = width - columns.length;
  if (zeroColumns !== undefined && zeros > 0)
    throw new Rejection(`${place}/matrix`, 'a zero column that should be left out');
  if (dimension === null && zeros + left > 0)
    throw new Rejection(`${place}/matrix`, 'a zero column where the width is free');
  return { columns, zeros: zeros + left };
}

function checkProduct(matrix: Matrix, gram: Matrix, place: string): void {
  const product = times(matrix, turned(matrix));
  gram.forEach((row, i) =>
    row.forEach((x, j) => {
      if ((product[i]?.[j] ?? 0n) !== x)
        throw new Rejection(
          `${place}/matrix`,
          `rows ${i + 1} and ${j + 1} have inner product ${product[i]?.[j] ?? 0n}, expected ${x}`,
        );
    }),
  );
}

/** A column with its first nonzero entry positive, as text; only nonzero entries stand in it. */
function normalColumn(column: readonly bigint[]): string {
  const lead = column.find((x) => x !== 0n)!;
  return column.flatMap((x, i) => (x === 0n ? [] : [`${i}:${lead < 0n ? -x : x}`])).join(',');
}

/** 2^(n−z) · n! / (z! · ∏ m_i!). */
function countOrbit(sortedColumns: readonly string[], zeros: number): bigint {
  let size = 1n;
  let run = 0n;
  sortedColumns.forEach((column, i) => {
    run = i > 0 && sortedColumns[i - 1] === column ? run + 1n : 1n;
    size = (size * 2n * BigInt(zeros + i + 1)) / run;
  });
  return size;
}

/** Names of recorded results, except those that say nothing (not applicable, undecided). */
export function testNames(value: Json | undefined, place: string): string[] {
  const o = objectOf(value, place, [
    'complement?',
    'index?',
    'metaboliser?',
    'pair?',
    'cubiquity?',
    'changemaker?',
    'halfChangemaker?',
    'dInvariants?',
    'doubleOrbits?',
  ]);
  return Object.entries(o).flatMap(([name, result]) => {
    const silent =
      result !== null &&
      typeof result === 'object' &&
      ('undecided' in result || ('applies' in result && (result as { applies: Json }).applies === false));
    return silent ? [] : [name];
  });
}
