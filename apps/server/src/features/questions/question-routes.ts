/** Questions: asked, watched, held, resumed, extended, withdrawn; their certificate. */
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { z } from 'zod';
import { api, LIMITS, Refusal, type QuestionView } from '@palmette/contracts';
import type { Actor } from '@palmette/store';
import { hasAlready, tagOf } from '../../http/etag.ts';
import { route, type Route } from '../../http/route.ts';
import type { Services } from '../../services.ts';
import { needAccess } from '../studies/study-access.ts';
import { ask } from './ask.ts';

const DEFAULT_ITEMS = 100;
const NO_QUESTION = 'there is no such question';
const idsQuery = z.object({
  ids: z
    .string()
    .min(1)
    .max(LIMITS.pageItems * 40),
});

async function viewQuestion(services: Services, personId: string, id: string): Promise<QuestionView> {
  const view = await services.store.questions.view(personId, id);
  if (view === null) throw new Refusal('not-found', NO_QUESTION);
  return { ...view, document: JSON.parse(view.document) as QuestionView['document'] };
}

/** A question may be changed by who asked it and by the leads and coauthors of its study. */
async function needQuestion(services: Services, personId: string, id: string, what: 'read' | 'write'): Promise<void> {
  const [summary] = await services.store.questions.byIds(personId, [id]);
  if (summary === undefined) throw new Refusal('not-found', NO_QUESTION);
  await needAccess(services, personId, summary.studyId, what);
}

function action(name: 'withdraw' | 'hold' | 'resume', summary: string): Route {
  return route({
    method: 'post',
    path: `/questions/{id}/${name}`,
    who: 'researcher',
    summary,
    answer: api.questionView,
    async run({ services, viewer, params }) {
      await needQuestion(services, viewer.person.id, params['id']!, 'write');
      const by: Actor = viewer.person;
      await services.store.questions[name](by, params['id']!);
      return viewQuestion(services, viewer.person.id, params['id']!);
    },
  });
}

export const questionRoutes = [
  route({
    method: 'get',
    path: '/studies/{id}/questions',
    who: 'signed in',
    summary: 'Questions of a study, newest change first.',
    query: api.pageQuery,
    answer: api.page(api.questionSummary),
    async run({ services, viewer, params, query, request, response }) {
      await needAccess(services, viewer.person.id, params['id']!, 'read');
      const page = await services.store.questions.list(viewer.person.id, params['id']!, {
        after: query.after,
        limit: query.limit ?? DEFAULT_ITEMS,
      });
      if (!hasAlready(request, response, tagOf(page))) return page;
    },
  }),
  route({
    method: 'post',
    path: '/studies/{id}/questions',
    who: 'researcher',
    summary: 'Ask a question. The body is a question document; Idempotency-Key is honoured.',
    document: true,
    answer: api.questionView,
    status: 201,
    async run({ services, viewer, params, request }) {
      await needAccess(services, viewer.person.id, params['id']!, 'write');
      const id = await ask(
        services,
        viewer.person,
        params['id']!,
        request.body as string,
        request.get('idempotency-key'),
      );
      return viewQuestion(services, viewer.person.id, id);
    },
  }),
  route({
    method: 'get',
    path: '/questions',
    who: 'signed in',
    summary: 'Several questions at once, by ids with commas between.',
    query: idsQuery,
    answer: api.page(api.questionSummary),
    async run({ services, viewer, query, request, response }) {
      const ids = query.ids.split(',').filter((id) => id !== '');
      if (ids.length > LIMITS.pageItems)
        throw new Refusal('limit', `expected at most ${LIMITS.pageItems} ids, found ${ids.length}`, '/ids');
      const page = { items: await services.store.questions.byIds(viewer.person.id, ids), next: null };
      if (!hasAlready(request, response, tagOf(page))) return page;
    },
  }),
  route({
    method: 'get',
    path: '/questions/{id}',
    who: 'signed in',
    summary: 'One question: state, verdict, progress. ETag from its progress counter.',
    answer: api.questionView,
    async run({ services, viewer, params, request, response }) {
      const seq = await services.store.questions.progressSeq(viewer.person.id, params['id']!);
      if (seq === null) throw new Refusal('not-found', NO_QUESTION);
      if (!hasAlready(request, response, seq)) return viewQuestion(services, viewer.person.id, params['id']!);
    },
  }),
  route({
    method: 'get',
    path: '/questions/{id}/cover',
    who: 'signed in',
    summary: 'The cover: parcels with their share of the tree and how much of each is done.',
    answer: api.cover,
    async run({ services, viewer, params }) {
      await needQuestion(services, viewer.person.id, params['id']!, 'read');
      return services.store.questions.cover(params['id']!);
    },
  }),
  route({
    method: 'get',
    path: '/questions/{id}/certificate',
    who: 'signed in',
    summary: 'The certificate, byte for byte as it was checked.',
    async run({ services, viewer, params, request, response }) {
      await needQuestion(services, viewer.person.id, params['id']!, 'read');
      const certificate = await services.store.questions.certificate(params['id']!);
      if (certificate === null) throw new Refusal('not-found', 'there is no certificate yet');
      if (hasAlready(request, response, certificate.sha256)) return;
      response.status(200);
      response.setHeader('Content-Type', 'application/json; charset=utf-8');
      response.setHeader(
        'Content-Disposition',
        `attachment; filename="palmette-${certificate.sha256.slice(0, 12)}.json"`,
      );
      await pipeline(Readable.from(certificate.chunks), response);
    },
  }),
  action('withdraw', 'Withdraw the search; what was found stays.'),
  action('hold', 'Hold the search where it is.'),
  action('resume', 'Let a held search go on.'),
  route({
    method: 'post',
    path: '/questions/{id}/extend',
    who: 'researcher',
    summary: 'Give the search more CPU time; a spent one goes on where it was.',
    body: api.extend,
    answer: api.questionView,
    async run({ services, viewer, params, body }) {
      await needQuestion(services, viewer.person.id, params['id']!, 'write');
      await services.store.questions.extend(viewer.person, params['id']!, body.cpuSeconds * 1000);
      return viewQuestion(services, viewer.person.id, params['id']!);
    },
  }),
];
