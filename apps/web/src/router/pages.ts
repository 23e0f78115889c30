/** Pages that are mounted in more than one place. */
import type { Component } from 'vue';

/** The page of the other hand, found by pattern so that the frame can be built before it stands. */
export const newQuestionPage: () => Promise<{ default: Component }> =
  import.meta.glob<{ default: Component }>('../pages/NewQuestion.vue')['../pages/NewQuestion.vue'] ??
  (() => import('../pages/NotFound.vue'));
