/** Pages that are mounted in more than one place. */
export const newQuestionPage = () => import('../pages/NewQuestion.vue');
