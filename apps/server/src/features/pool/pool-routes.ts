/** The pool: what runs and waits, stations, and what the admin sees of both. */
import { z } from 'zod';
import { api, Refusal } from '@palmette/contracts';
import { hasAlready, tagOf } from '../../http/etag.ts';
import { route, type Route } from '../../http/route.ts';

const DEFAULT_ITEMS = 100;
const daysQuery = z.object({ days: z.coerce.number().int().min(1).max(366).optional() });

function stationAction(name: 'stand-by' | 'take-work', summary: string): Route {
  return route({
    method: 'post',
    path: `/stations/{id}/${name}`,
    who: 'admin',
    summary,
    status: 204,
    async run({ services, viewer, params }) {
      if (!(await services.store.pool.standBy(viewer.person, params['id']!, name === 'stand-by')))
        throw new Refusal('not-found', 'there is no such station');
    },
  });
}

function poolAction(name: 'hold' | 'resume', summary: string): Route {
  return route({
    method: 'post',
    path: `/pool/${name}`,
    who: 'admin',
    summary,
    status: 204,
    run: ({ services, viewer }) => services.store.pool.holdPool(viewer.person, name === 'hold'),
  });
}

export const poolRoutes = [
  route({
    method: 'get',
    path: '/pool',
    who: 'signed in',
    summary: 'What runs and waits: one’s own in full, others as counts; one’s allowance and what is left of it.',
    answer: api.pool,
    async run({ services, viewer, request, response }) {
      const view = await services.store.pool.view(viewer.person.id);
      if (!hasAlready(request, response, tagOf(view))) return view;
    },
  }),
  poolAction('hold', 'Hold the whole pool: nothing new is begun and what runs is put down.'),
  poolAction('resume', 'Let the pool go on.'),
  route({
    method: 'get',
    path: '/stations',
    who: 'admin',
    summary: 'Stations that are heard or were heard lately.',
    answer: api.page(api.station),
    async run({ services, request, response }) {
      const page = { items: await services.store.pool.stations(), next: null };
      if (!hasAlready(request, response, tagOf(page))) return page;
    },
  }),
  stationAction('stand-by', 'A station finishes what it holds and stands by.'),
  stationAction('take-work', 'A station takes work again.'),
  route({
    method: 'get',
    path: '/usage',
    who: 'admin',
    summary: 'CPU time by person and day.',
    query: daysQuery,
    answer: api.page(api.usageRow),
    run: async ({ services, query }) => ({ items: await services.store.pool.usage(query.days ?? 30), next: null }),
  }),
  route({
    method: 'get',
    path: '/audit',
    who: 'admin',
    summary: 'The audit trail, newest first.',
    query: api.pageQuery,
    answer: api.page(api.auditRow),
    run: async ({ services, query }) =>
      services.store.pool.audit({ after: query.after, limit: query.limit ?? DEFAULT_ITEMS }),
  }),
  route({
    method: 'get',
    path: '/letters',
    who: 'admin',
    summary: 'Letters, newest first.',
    query: api.pageQuery,
    answer: api.page(api.letterRow),
    run: async ({ services, query }) =>
      services.store.pool.letters({ after: query.after, limit: query.limit ?? DEFAULT_ITEMS }),
  }),
];
