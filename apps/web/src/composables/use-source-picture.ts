/**
 * What the source of a question builds, worked out in this browser for the drawing and the facts beside it. The lattice
 * package comes only when it is needed; big sources are left to the certificate.
 */
import { shallowRef, watch, type ShallowRef } from 'vue';
import type { Question, QuestionView } from '@palmette/contracts';

export interface SourcePicture {
  readonly weights: readonly string[];
  readonly edges: readonly (readonly [number, number, number])[];
  readonly rank: number;
  readonly nullity: number;
  readonly determinant: string;
  /** “negative definite”. */
  readonly definiteness: string;
  /** Elementary divisors above 1, as decimal strings. */
  readonly discriminantGroup: readonly string[];
  readonly remarks: readonly string[];
}

/** Characters of a source that is still read on the main thread: a few milliseconds. */
const READ_HERE = 4_000;
const MOST_ROWS = 60;

export function useSourcePicture(question: ShallowRef<QuestionView | null>): ShallowRef<SourcePicture | null> {
  const picture = shallowRef<SourcePicture | null>(null);
  watch(
    () => question.value?.id,
    async () => {
      const source = question.value?.document.source;
      if (source !== undefined && JSON.stringify(source).length <= READ_HERE) picture.value = await read(source);
    },
    { immediate: true },
  );
  return picture;
}

async function read(source: Question['source']): Promise<SourcePicture | null> {
  const { buildLattice, definiteness, discriminantGroup, SourceFault } = await import('@palmette/lattice');
  try {
    const lattice = buildLattice(source);
    if (lattice.gram.length === 0 || lattice.gram.length > MOST_ROWS) return null;
    const sign = BigInt(lattice.sign);
    return {
      weights: lattice.gram.map((row, i) => String(sign * row[i]!)),
      edges: lattice.gram.flatMap((row, i) =>
        row.flatMap((x, j) => (j > i && x !== 0n ? [[i, j, Number(sign * x)] as const] : [])),
      ),
      rank: lattice.rank,
      nullity: lattice.nullity,
      determinant: String(lattice.determinant),
      definiteness: definiteness(lattice),
      discriminantGroup: discriminantGroup(lattice).map(String),
      remarks: lattice.remarks,
    };
  } catch (error) {
    // The server read it; a browser that cannot only goes without the picture.
    if (error instanceof SourceFault) return null;
    throw error;
  }
}
