/** Options of `palmette answer`, and how they change a question document. */
import { METHOD_NAMES, readQuestion, Refusal, type MethodName } from '@palmette/contracts';
import { UsageError } from './read-input.ts';

export interface AnswerOptions {
  readonly lines: boolean;
  /** Forces a method, whatever the document says. */
  readonly method: MethodName | null;
  readonly secondOpinion: boolean;
  /** What is left: the file. */
  readonly rest: readonly string[];
}

/** @throws UsageError for a method that there is not */
export function answerOptions(args: readonly string[]): AnswerOptions {
  const rest: string[] = [];
  let [lines, secondOpinion] = [false, false];
  let method: MethodName | null = null;
  for (let i = 0; i < args.length; i += 1) {
    const arg = args[i]!;
    if (arg === '--lines') lines = true;
    else if (arg === '--second-opinion') secondOpinion = true;
    else if (arg === '--method') {
      i += 1;
      method = methodNamed(args[i]);
    } else rest.push(arg);
  }
  return { lines, method, secondOpinion, rest };
}

function methodNamed(text: string | undefined): MethodName {
  const found = METHOD_NAMES.find((name) => name === text);
  if (found !== undefined) return found;
  throw new UsageError(`--method: expected ${METHOD_NAMES.join(', ')}, found ${text ?? 'nothing'}`);
}

/** The document with the options put in. One that would be refused stays as it is: the refusal names its own fault. */
export function withOptions(document: string, { method, secondOpinion }: AnswerOptions): string {
  if (method === null && !secondOpinion) return document;
  try {
    const question = readQuestion(document);
    return JSON.stringify({
      ...question,
      ...(method === null ? {} : { method }),
      ...(secondOpinion ? { secondOpinion } : {}),
    });
  } catch (error) {
    if (error instanceof Refusal) return document;
    throw error;
  }
}
