/** Times of a search between two answers of the server: what has elapsed goes on, and when the station was last heard. */
import { computed, ref, watch, type ComputedRef, type ShallowRef } from 'vue';
import type { QuestionView } from '@palmette/contracts';
import { agoInWords } from '@palmette/wording';
import { useNow } from './use-now.ts';

const RUNS = ['waiting', 'searching', 'held'];

export function useQuestionClock(question: ShallowRef<QuestionView | null>): {
  readonly elapsed: ComputedRef<number>;
  /** “Last word from the station 3 s ago.” */
  readonly heard: ComputedRef<string>;
} {
  const now = useNow();
  const readAt = ref(0);
  watch(question, () => (readAt.value = Date.now()));

  const elapsed = computed(() => {
    if (question.value === null) return 0;
    const since = RUNS.includes(question.value.state) ? Math.max(0, now.value - readAt.value) / 1000 : 0;
    return question.value.progress.elapsedSeconds + since;
  });
  const heard = computed(() => {
    const at = question.value?.progress.heardAt ?? null;
    if (at === null || question.value?.state !== 'searching') return '';
    return `Last word from the station ${agoInWords(Math.max(0, now.value - Date.parse(at)) / 1000)}.`;
  });
  return { elapsed, heard };
}
