/** Which sentence of the grounds belongs to a settled question, once its certificate is at hand. */
import type { QuestionView } from '@palmette/contracts';
import { countInWords, exclusionReason, groundInShort } from '@palmette/wording';
import type { FileHead } from '../../api/certificate-file.ts';

export function groundSentence(question: QuestionView, head: FileHead | null): string {
  if (question.ground === null) return 'It is settled.';
  if (question.verdict === 'excluded') {
    const exclusion = head?.evidence.exclusions.find((e) => e.dimension === question.dimension);
    const searched = exclusion?.tree === undefined ? '' : ` It has ${countInWords(exclusion.tree.nodes)} nodes.`;
    return (
      exclusionReason({
        ground: question.ground,
        dimension: question.dimension,
        rank: question.rank,
        determinant: head?.lattice.determinant,
        primes: exclusion?.primes,
      }) + searched
    );
  }
  if (question.ground === 'embedding') return 'The embedding is listed, and multiplies out to the form.';
  const list = head?.evidence.list;
  if (question.ground === 'exhaustion') {
    return list === undefined || list === null
      ? 'Every branch was searched.'
      : `Every branch was searched: ${countInWords(list.nodes)} nodes.`;
  }
  return `Ground: ${groundInShort(question.ground)}.`;
}
