/** From the text of a question to its lattice, reduced basis and arithmetic. */
import { createHash } from 'node:crypto';
import { canonicalQuestion, readQuestion, Refusal, type CanonicalQuestion, type Question } from '@palmette/contracts';
import {
  arithmeticGround,
  buildLattice,
  columnGround,
  reducedBasis,
  SourceFault,
  type ArithmeticGround,
  type ColumnGround,
  type Lattice,
} from '@palmette/lattice';
import { shortBasis, type Basis } from '@palmette/search';

export interface Understood {
  readonly question: Question;
  readonly canonical: CanonicalQuestion;
  readonly lattice: Lattice;
  readonly reduced: ReturnType<typeof reducedBasis>;
  /** Why the lattice cannot embed in Z^n (null: in any) by arithmetic alone, or null. */
  readonly arithmetic: (n: number | null) => ArithmeticGround | ColumnGround | null;
  /** The basis in which the admissible columns were listed: that of a ground `column`. */
  readonly shortBasis: () => Basis;
  /** The certificate is one line whatever its size. */
  readonly oneLine: boolean;
  /** 32 bits of the canonical question's hash: seeds every probe. */
  readonly seed: number;
}

export const sha256 = (bytes: Uint8Array | string): string => createHash('sha256').update(bytes).digest('hex');

/** The ground `column` is tried up to this rank, for so many entries of columns: milliseconds. */
const COLUMN_RANK = 60;
const COLUMN_STEPS = 20_000;

/**
 * Reads and builds.
 * @throws Refusal with the path of the field, what was expected and what was found.
 */
export function understand(document: string, options: { readonly oneLine?: boolean } = {}): Understood {
  const question = readQuestion(document);
  const lattice = built(question);
  const canonical = canonicalQuestion(question);
  const reduced = reducedBasis(lattice);
  const known = new Map<number | null, ArithmeticGround | ColumnGround | null>();
  let shortest: ReturnType<typeof shortBasis> | null = null;
  const short = () => (shortest ??= shortBasis(reduced.gram, reduced.basis));
  return {
    question,
    canonical,
    lattice,
    reduced,
    arithmetic: (n) => {
      if (!known.has(n)) known.set(n, (n === null ? null : arithmeticGround(lattice, n)) ?? column(n));
      return known.get(n)!;
    },
    shortBasis: () => short().basis,
    oneLine: options.oneLine === true,
    seed: Number.parseInt(sha256(JSON.stringify(canonical)).slice(0, 8), 16),
  };

  function column(n: number | null): ColumnGround | null {
    if (lattice.rank > COLUMN_RANK) return null;
    const ground = columnGround(short().gram, n, COLUMN_STEPS);
    return ground === 'too many' ? null : ground;
  }
}

function built(question: Question): Lattice {
  try {
    return buildLattice(question.source);
  } catch (error) {
    if (error instanceof SourceFault) throw new Refusal(error.code, error.message, `/source${error.path}`);
    throw error;
  }
}

/** The dimension that the target fixes by itself, or null for least and any. */
export function fixedDimension(understood: Understood): number | null {
  const { target } = understood.question;
  if ('dimension' in target) return target.dimension;
  if ('excess' in target) return understood.lattice.rank + target.excess;
  return null;
}
