/** The parcels of a search, read again whenever the question's progress has changed and it still runs. */
import { onScopeDispose, shallowRef, watch, type ShallowRef } from 'vue';
import type { ParcelView, QuestionView } from '@palmette/contracts';
import { ApiError, isAborted, UnreachableError } from '../api/errors.ts';
import { getCover } from '../api/questions.ts';

export function useQuestionCover(
  id: string,
  question: ShallowRef<QuestionView | null>,
): ShallowRef<readonly ParcelView[]> {
  const parcels = shallowRef<readonly ParcelView[]>([]);
  const controller = new AbortController();
  let reading = false;

  watch(question, async (now) => {
    if (now === null || now.state === 'settled' || now.state === 'broken' || reading) return;
    reading = true;
    try {
      parcels.value = (await getCover(id, controller.signal)).parcels;
    } catch (error) {
      // The page says by its own request that the server is away; the cover stays as it was.
      if (!isAborted(error) && !(error instanceof UnreachableError) && !(error instanceof ApiError)) throw error;
    } finally {
      reading = false;
    }
  });

  onScopeDispose(() => controller.abort());
  return parcels;
}
