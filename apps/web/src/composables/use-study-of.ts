/** The study that a question lies in, read once the question has named it. */
import { onScopeDispose, shallowRef, watch, type ShallowRef } from 'vue';
import type { QuestionView, Study } from '@palmette/contracts';
import { ApiError, isAborted, UnreachableError } from '../api/errors.ts';
import { getStudy } from '../api/studies.ts';

export function useStudyOf(question: ShallowRef<QuestionView | null>): ShallowRef<Study | null> {
  const study = shallowRef<Study | null>(null);
  const controller = new AbortController();
  watch(
    () => question.value?.studyId,
    async (id) => {
      if (id === undefined) return;
      try {
        study.value = await getStudy(id, controller.signal);
      } catch (error) {
        // Without it only a name in the path is missing; the page says by its own request what is wrong.
        if (!isAborted(error) && !(error instanceof ApiError) && !(error instanceof UnreachableError)) throw error;
      }
    },
  );
  onScopeDispose(() => controller.abort());
  return study;
}
