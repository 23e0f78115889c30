/** Into which study a question goes: one that the person may write in, or “First questions”, made when it is needed. */
import { computed, ref, watch, type ComputedRef, type Ref } from 'vue';
import type { Study } from '@palmette/contracts';
import * as api from '../../api/studies.ts';
import { useLoaded } from '../../composables/use-loaded.ts';

export const FIRST_QUESTIONS = 'First questions';
/** The value that stands for a study that is still to be made. */
export const NEW_STUDY = '';

export interface StudyChoice {
  readonly studies: ComputedRef<readonly Study[] | null>;
  /** Id, or NEW_STUDY. */
  readonly chosen: Ref<string>;
  readonly title: ComputedRef<string>;
  readonly error: ComputedRef<unknown>;
  /** The id, after making the study if there is none yet. */
  take(): Promise<string>;
}

/** Studies on one page of the list; who has more picks the study from its own page. */
const LISTED = 200;

export function useStudyChoice(given: () => string | undefined): StudyChoice {
  const list = useLoaded(async (signal) => (await api.listStudies({ limit: LISTED, signal })).items);
  const studies = computed(() => list.value.value?.filter(({ access }) => access !== 'reader') ?? null);
  const chosen = ref(given() ?? NEW_STUDY);
  watch(studies, (now) => {
    if (given() !== undefined || now === null || chosen.value !== NEW_STUDY) return;
    chosen.value = (now.find(({ title }) => title === FIRST_QUESTIONS) ?? now[0])?.id ?? NEW_STUDY;
  });
  return {
    studies,
    chosen,
    title: computed(() => studies.value?.find(({ id }) => id === chosen.value)?.title ?? FIRST_QUESTIONS),
    error: computed(() => list.error.value),
    async take() {
      if (chosen.value === NEW_STUDY) chosen.value = (await api.makeStudy(FIRST_QUESTIONS)).id;
      return chosen.value;
    },
  };
}
