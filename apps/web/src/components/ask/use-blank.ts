/** The first blank: takes what is typed once the keys rest, and refuses it only when they have rested longer. */
import { onScopeDispose, shallowRef, watch, type ShallowRef } from 'vue';
import { Refusal, type Source } from '@palmette/contracts';
import { readSourceText, SourceFault } from '@palmette/lattice';
import { readPastedSource } from '../source/read-pasted-source.ts';
import type { QuestionDraft } from './use-question-draft.ts';

/** Keys follow each other faster than the first; what is not understood may be half typed for the second. */
const TAKE_AFTER_MS = 220;
const REFUSE_AFTER_MS = 900;

export interface Blank {
  /** What stands in the blank and was not understood. */
  readonly fault: ShallowRef<SourceFault | null>;
  type(text: string): void;
  /** Enter, a paste, a sample, or the blank was left: at once. */
  finish(text: string): void;
}

export function useBlank(draft: QuestionDraft): Blank {
  const fault = shallowRef<SourceFault | null>(null);
  // what is typed into the forms takes the place of what was not understood here
  watch([draft.source, draft.filled], () => (fault.value = null), { flush: 'sync' });

  let waiting: ReturnType<typeof setTimeout> | undefined;
  onScopeDispose(() => clearTimeout(waiting));

  function type(text: string) {
    clearTimeout(waiting);
    fault.value = null;
    if (text.trim() === '') {
      draft.clearSource();
      return;
    }
    // the 17 of 17/5 is no chain yet
    if (/^\s*[-−+]?\d+\s*$/.test(text)) return;
    waiting = setTimeout(() => {
      const refused = tryToTake(text);
      if (refused !== null) waiting = setTimeout(() => (fault.value = refused), REFUSE_AFTER_MS - TAKE_AFTER_MS);
    }, TAKE_AFTER_MS);
  }
  function finish(text: string) {
    clearTimeout(waiting);
    if (text.trim() !== '') fault.value = tryToTake(text);
  }

  /** Why the text is not understood; null if it was, and stands in the form now. */
  function tryToTake(text: string): SourceFault | null {
    try {
      const pasted = /[{\n]/.test(text)
        ? readPastedSource(text)
        : { kind: 'source' as const, source: readSourceText(text) as Source };
      if (pasted.kind === 'question') draft.takeQuestion(pasted.question);
      else draft.takeSource(pasted.source);
      return null;
    } catch (error) {
      if (error instanceof SourceFault) return error;
      if (error instanceof Refusal) return new SourceFault('', error.message);
      throw error;
    }
  }

  return { fault, type, finish };
}
