/**
 * Everything that is filled in on the page of a new question, and the document that it makes. It is kept for this
 * window, so that a look at another page loses nothing; it goes to the server only when the button is pressed.
 */
import { computed, reactive, ref, watch, type ComputedRef, type Ref } from 'vue';
import {
  QUESTION_FORMAT,
  validateQuestion,
  type MethodName,
  type Question,
  type Scope,
  type Source,
  type Target,
  type TestName,
} from '@palmette/contracts';
import { SourceFault } from '@palmette/lattice';
import { readSpan } from '@palmette/wording';
import { emptyDraft, fillDraft, isEmpty, readDraft, type SourceDraft } from '../source/source-draft.ts';
import { fillTarget, rankTarget, readTarget, type TargetDraft } from './target-draft.ts';

const KEPT_UNDER = 'palmette.new-question';

export interface QuestionDraft {
  readonly source: SourceDraft;
  readonly target: TargetDraft;
  readonly rest: {
    scope: Scope;
    tests: TestName[];
    budget: string;
    title: string;
    /** Empty: the engine chooses. */
    method: MethodName | '';
    secondOpinion: boolean;
  };
  readonly empty: ComputedRef<boolean>;
  /** Null where nothing is typed, or where it is refused. */
  readonly readSource: ComputedRef<Source | null>;
  readonly sourceFault: ComputedRef<SourceFault | null>;
  readonly readTarget: ComputedRef<Target | null>;
  readonly targetFault: ComputedRef<string>;
  readonly budgetFault: ComputedRef<string>;
  /** Counts the fillings-in from outside the forms, so that who shows the source in short can follow. */
  readonly filled: Ref<number>;
  takeSource(source: Source): void;
  takeQuestion(question: Question): void;
  /** @throws Refusal if a limit of the whole document is passed */
  document(): Question;
  /** Empties the first blank and the forms under it. */
  clearSource(): void;
  startAfresh(): void;
}

const emptyRest = (): QuestionDraft['rest'] => ({
  scope: 'all',
  tests: [],
  budget: '8 h',
  title: '',
  method: '',
  secondOpinion: false,
});

export function useQuestionDraft(): QuestionDraft {
  const source = reactive(emptyDraft()) as SourceDraft;
  const target = reactive(rankTarget());
  const rest = reactive(emptyRest());
  const filled = ref(0);
  restore();

  const read = computed((): { source: Source | null; fault: SourceFault | null } => {
    if (isEmpty(source)) return { source: null, fault: null };
    try {
      return { source: readDraft(source), fault: null };
    } catch (error) {
      if (error instanceof SourceFault) return { source: null, fault: error };
      throw error;
    }
  });
  const targetReading = computed(() => readTarget(target));
  const budgetSeconds = computed(() => (rest.budget.trim() === '' ? undefined : readSpan(rest.budget)));

  watch([source, target, rest], keep);

  function keep(): void {
    try {
      sessionStorage.setItem(KEPT_UNDER, JSON.stringify({ source, target, rest }));
    } catch {
      // a full or forbidden store loses the convenience and nothing else
    }
  }
  function restore(): void {
    const text = sessionStorage.getItem(KEPT_UNDER);
    if (text === null) return;
    try {
      const kept = JSON.parse(text) as { source: SourceDraft; target: TargetDraft; rest: QuestionDraft['rest'] };
      Object.assign(source, kept.source);
      Object.assign(target, kept.target);
      Object.assign(rest, kept.rest);
    } catch {
      sessionStorage.removeItem(KEPT_UNDER);
    }
  }

  return {
    source,
    target,
    rest,
    filled,
    empty: computed(() => isEmpty(source)),
    readSource: computed(() => read.value.source),
    sourceFault: computed(() => read.value.fault),
    readTarget: computed(() => ('target' in targetReading.value ? targetReading.value.target : null)),
    targetFault: computed(() => ('fault' in targetReading.value ? targetReading.value.fault : '')),
    budgetFault: computed(() =>
      budgetSeconds.value === null
        ? `Refused: expected a time such as “8 h” or “90 min”, found “${rest.budget.trim()}”.`
        : '',
    ),
    takeSource(next) {
      fillDraft(source, next);
      filled.value += 1;
    },
    takeQuestion(question) {
      fillDraft(source, question.source);
      fillTarget(target, question.target);
      rest.scope = question.scope;
      rest.tests = [...question.tests];
      rest.title = question.title ?? '';
      rest.method = question.method ?? '';
      rest.secondOpinion = question.secondOpinion === true;
      if (question.budget !== undefined) rest.budget = spanAsTyped(question.budget.cpuSeconds);
      filled.value += 1;
    },
    document() {
      const title = rest.title.trim();
      const seconds = budgetSeconds.value;
      return validateQuestion({
        format: QUESTION_FORMAT,
        ...(title === '' ? {} : { title }),
        source: read.value.source,
        target: 'target' in targetReading.value ? targetReading.value.target : null,
        scope: rest.scope,
        tests: rest.tests,
        ...(rest.method === '' ? {} : { method: rest.method }),
        ...(rest.secondOpinion ? { secondOpinion: true } : {}),
        ...(seconds === undefined || seconds === null ? {} : { budget: { cpuSeconds: seconds } }),
      });
    },
    clearSource() {
      Object.assign(source, emptyDraft());
    },
    startAfresh() {
      Object.assign(source, emptyDraft());
      Object.assign(target, rankTarget());
      Object.assign(rest, emptyRest());
      filled.value += 1;
      // after the watcher has kept the empty draft
      queueMicrotask(() => sessionStorage.removeItem(KEPT_UNDER));
    },
  };
}

/** “8 h” for whole hours, “90 min” for whole minutes, else seconds: what `readSpan` reads. */
function spanAsTyped(seconds: number): string {
  if (seconds % 3600 === 0) return `${seconds / 3600} h`;
  return seconds % 60 === 0 ? `${seconds / 60} min` : `${seconds} s`;
}
