/** What was pasted or dropped anywhere on the page: a question document, a source in JSON, or what one could have typed. */
import {
  readStrictJson,
  source as sourceSchema,
  validate,
  validateQuestion,
  QUESTION_FORMAT,
  type Question,
  type Source,
} from '@palmette/contracts';
import { readSourceText } from '@palmette/lattice';

export type Pasted =
  { readonly kind: 'question'; readonly question: Question } | { readonly kind: 'source'; readonly source: Source };

/** @throws SourceFault or Refusal where nothing fits */
export function readPastedSource(text: string): Pasted {
  const plain = text.trim();
  if (!plain.startsWith('{') || !plain.includes('"kind"')) {
    return { kind: 'source', source: readSourceText(plain) as Source };
  }
  const document = readStrictJson(plain);
  if (typeof document === 'object' && document !== null && 'format' in document && document.format === QUESTION_FORMAT)
    return { kind: 'question', question: validateQuestion(document) };
  return { kind: 'source', source: validate(sourceSchema, document) };
}
