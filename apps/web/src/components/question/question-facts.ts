/** What the sentences about a verdict need, from the question and, once it is at hand, from its certificate. */
import type { QuestionView } from '@palmette/contracts';
import type { VerdictFacts } from '@palmette/wording';
import type { FileExclusion, FileHead } from '../../api/certificate-file.ts';

export function questionFacts(question: QuestionView, head: FileHead | null): VerdictFacts {
  const exclusion = head?.evidence.exclusions.find((e) =>
    question.verdict === 'embeds' ? e.dimension === (question.dimension ?? 0) - 1 : e.dimension === question.dimension,
  );
  return {
    ...question,
    determinant: head?.lattice.determinant,
    exclusion: exclusion === undefined ? undefined : exclusionFacts(exclusion),
  };
}

/** An exclusion of the certificate as the words want it. */
export function exclusionFacts({ ground, dimension, primes, vectors, spanned }: FileExclusion) {
  return {
    ground,
    dimension,
    primes,
    columns: vectors === undefined || spanned === undefined ? undefined : { vectors, spanned },
  };
}
