/** Which sentence of the grounds belongs to a settled question, once its certificate is at hand. */
import type { QuestionView } from '@palmette/contracts';
import { agreementInWords, exclusionReason, groundInShort, noSecondInWords, treeInWords } from '@palmette/wording';
import type { FileHead, FileTree } from '../../api/certificate-file.ts';
import { exclusionFacts } from './question-facts.ts';

export function groundSentence(question: QuestionView, head: FileHead | null): string {
  if (question.ground === null) return 'It is settled.';
  if (question.verdict === 'excluded') {
    const exclusion = head?.evidence.exclusions.find((e) => e.dimension === question.dimension);
    return exclusionReason({
      dimension: question.dimension,
      rank: question.rank,
      determinant: head?.lattice.determinant,
      ...(exclusion === undefined ? {} : exclusionFacts(exclusion)),
      ground: question.ground,
    });
  }
  if (question.ground === 'embedding') return 'The embedding is listed, and multiplies out to the form.';
  if (question.ground === 'exhaustion') return 'Every case was gone through, and the list holds each orbit once.';
  return `Ground: ${groundInShort(question.ground)}.`;
}

/** The tree that carries the verdict, where it rests on one. */
function carrier(question: QuestionView, head: FileHead): FileTree | null {
  return head.evidence.list ?? head.evidence.exclusions.find((e) => e.dimension === question.dimension)?.tree ?? null;
}

export interface EvidenceFact {
  readonly name: string;
  readonly value: string;
}

/** What was gone through, and whether two methods agree on it. */
export function evidenceFacts(question: QuestionView, head: FileHead | null): readonly EvidenceFact[] {
  if (head === null) return [];
  const tree = carrier(question, head);
  const { second } = head.evidence;
  if (second === undefined) return tree === null ? [] : [{ name: 'listed by', value: treeInWords(tree) }];
  if (second === null || tree === null) {
    const none = { name: 'second opinion', value: noSecondInWords(question.ground) };
    return tree === null ? [none] : [{ name: 'listed by', value: treeInWords(tree) }, none];
  }
  return [
    { name: 'second opinion', value: agreementInWords([tree.method, second.method]) },
    { name: 'listed by', value: `${treeInWords(tree)}; and by ${treeInWords(second)}` },
  ];
}
