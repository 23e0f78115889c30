/**
 * The questions of a study: the first pages are read anew while the page is looked at, so that verdicts appear by
 * themselves; what lies deeper is read on wish and stays as it was.
 */
import { computed, ref, shallowRef, watch, type ComputedRef, type Ref } from 'vue';
import type { QuestionSummary } from '@palmette/contracts';
import { listQuestions, pollQuestions } from '../api/studies.ts';
import { usePolling } from './use-polling.ts';
import { useTask } from './use-task.ts';

const PAGE = 100;
/** The API gives out no more at once; so many are kept fresh. */
const FRESH = 500;

export interface StudyQuestions {
  readonly items: ComputedRef<readonly QuestionSummary[] | null>;
  readonly error: ComputedRef<unknown>;
  readonly more: ComputedRef<boolean>;
  readonly busy: Ref<boolean>;
  readonly loadMore: () => void;
  readonly refresh: () => void;
}

/** @param onChange called when the list has changed after its first reading */
export function useStudyQuestions(studyId: string, onChange: () => void): StudyQuestions {
  const limit = ref(PAGE);
  const deeper = shallowRef<readonly QuestionSummary[]>([]);
  const cursor = ref<string | null>(null);
  const polling = usePolling((etag, signal) => pollQuestions(studyId, limit.value, etag, signal));

  watch(polling.value, (page, before) => {
    if (page === null) return;
    if (deeper.value.length === 0) cursor.value = page.next;
    if (before !== null && JSON.stringify(before.items) !== JSON.stringify(page.items)) onChange();
  });

  const next = useTask(async () => {
    const page = await listQuestions(studyId, { after: cursor.value!, limit: PAGE });
    deeper.value = [...deeper.value, ...page.items];
    cursor.value = page.next;
  });

  return {
    items: computed(() => {
      if (polling.value.value === null) return null;
      const fresh = polling.value.value.items;
      const known = new Set(fresh.map((question) => question.id));
      return [...fresh, ...deeper.value.filter((question) => !known.has(question.id))];
    }),
    error: computed(() => polling.error.value ?? next.error.value),
    more: computed(() => cursor.value !== null),
    busy: next.busy,
    loadMore: () => {
      if (limit.value < FRESH && deeper.value.length === 0) {
        limit.value += PAGE;
        polling.refresh('anew');
      } else void next.run();
    },
    refresh: () => polling.refresh(),
  };
}
