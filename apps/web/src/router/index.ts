/** Addresses and their pages. Every page is loaded when it is first visited. */
import { createRouter, createWebHistory, type RouteRecordRaw, type Router } from 'vue-router';
import { newQuestionPage } from './pages.ts';
import { useSession } from '../stores/session.ts';

declare module 'vue-router' {
  interface RouteMeta {
    /** Can be seen without an account. */
    open?: boolean;
    admin?: boolean;
  }
}

const routes: RouteRecordRaw[] = [
  { path: '/', redirect: '/studies' },
  { path: '/sign-in', component: () => import('../pages/SignIn.vue'), meta: { open: true } },
  { path: '/invitation/:key?', component: () => import('../pages/AcceptInvitation.vue'), meta: { open: true } },
  { path: '/password', component: () => import('../pages/ForgottenPassword.vue'), meta: { open: true } },
  { path: '/password/:key', component: () => import('../pages/ResetPassword.vue'), meta: { open: true } },
  { path: '/studies', component: () => import('../pages/StudyList.vue') },
  { path: '/studies/:id', component: () => import('../pages/StudyPage.vue'), props: true },
  { path: '/studies/:studyId/new', component: newQuestionPage, props: true },
  { path: '/new', component: newQuestionPage },
  { path: '/questions/:id', component: () => import('../pages/QuestionPage.vue'), props: true },
  { path: '/pool', component: () => import('../pages/PoolPage.vue') },
  { path: '/account', component: () => import('../pages/AccountPage.vue') },
  {
    path: '/admin/:part(people|stations|usage|audit|letters)?',
    component: () => import('../pages/AdminPage.vue'),
    props: true,
    meta: { admin: true },
  },
  { path: '/:rest(.*)*', component: () => import('../pages/NotFound.vue'), meta: { open: true } },
];

export function makeRouter(): Router {
  const router = createRouter({
    history: createWebHistory(),
    routes,
    scrollBehavior: (to, from, saved) => saved ?? (to.path === from.path ? false : { top: 0 }),
  });

  router.beforeEach(async (to) => {
    const session = useSession();
    if (!session.known) await session.load();
    // The frame shows that the server is away, and keeps the address for when it is back.
    if (session.away) return true;
    if (to.meta.open === true) {
      return to.path === '/sign-in' && session.person !== null ? '/studies' : true;
    }
    if (session.person === null) return { path: '/sign-in', query: { next: to.fullPath } };
    if (to.meta.admin === true && !session.isAdmin) return '/studies';
    return true;
  });

  return router;
}
