/** Studies, their members and notes. */
import { api, Refusal } from '@palmette/contracts';
import { route } from '../../http/route.ts';
import { needAccess } from './study-access.ts';

const DEFAULT_ITEMS = 100;

export const studyRoutes = [
  route({
    method: 'get',
    path: '/studies',
    who: 'signed in',
    summary: 'Studies of whoever is signed in, latest change first.',
    query: api.pageQuery,
    answer: api.page(api.study),
    run: async ({ services, viewer, query }) =>
      services.store.studies.list(viewer.person.id, { after: query.after, limit: query.limit ?? DEFAULT_ITEMS }),
  }),
  route({
    method: 'post',
    path: '/studies',
    who: 'researcher',
    summary: 'Make a study; one becomes its lead.',
    body: api.studyMake,
    answer: api.study,
    status: 201,
    run: async ({ services, viewer, body }) => services.store.studies.make(viewer.person, body.title),
  }),
  route({
    method: 'get',
    path: '/studies/{id}',
    who: 'signed in',
    summary: 'One study.',
    answer: api.study,
    async run({ services, viewer, params }) {
      const study = await services.store.studies.get(viewer.person.id, params['id']!);
      if (study === null) throw new Refusal('not-found', 'there is no such study');
      return study;
    },
  }),
  route({
    method: 'patch',
    path: '/studies/{id}',
    who: 'researcher',
    summary: 'Rename a study.',
    body: api.studyChange,
    answer: api.study,
    async run({ services, viewer, params, body }) {
      await needAccess(services, viewer.person.id, params['id']!, 'lead');
      if (body.title !== undefined) await services.store.studies.rename(viewer.person, params['id']!, body.title);
      return (await services.store.studies.get(viewer.person.id, params['id']!))!;
    },
  }),
  route({
    method: 'delete',
    path: '/studies/{id}',
    who: 'researcher',
    summary: 'Move a study to the bin, where it stays for 30 days.',
    status: 204,
    async run({ services, viewer, params }) {
      await needAccess(services, viewer.person.id, params['id']!, 'lead');
      await services.store.studies.bin(viewer.person, params['id']!);
    },
  }),
  route({
    method: 'get',
    path: '/studies/{id}/members',
    who: 'signed in',
    summary: 'Members of a study.',
    answer: api.page(api.member),
    async run({ services, viewer, params }) {
      await needAccess(services, viewer.person.id, params['id']!, 'read');
      return { items: await services.store.studies.members(params['id']!), next: null };
    },
  }),
  route({
    method: 'put',
    path: '/studies/{id}/members',
    who: 'researcher',
    summary: 'Add a member, or change the access of one.',
    body: api.memberPut,
    answer: api.member,
    async run({ services, viewer, params, body }) {
      await needAccess(services, viewer.person.id, params['id']!, 'lead');
      const person = await services.store.people.byEmail(body.email);
      if (person === null || !person.active)
        throw new Refusal(
          'not-found',
          `expected the e-mail of somebody who has an account, found ${body.email}`,
          '/email',
        );
      await services.store.studies.putMember(viewer.person, params['id']!, person.id, body.access);
      return (await services.store.studies.members(params['id']!)).find((m) => m.person.id === person.id)!;
    },
  }),
  route({
    method: 'delete',
    path: '/studies/{id}/members/{personId}',
    who: 'signed in',
    summary: 'Remove a member; anybody may leave.',
    status: 204,
    async run({ services, viewer, params }) {
      const leaves = params['personId'] === viewer.person.id;
      await needAccess(services, viewer.person.id, params['id']!, leaves ? 'read' : 'lead');
      await services.store.studies.removeMember(viewer.person, params['id']!, params['personId']!);
    },
  }),
  route({
    method: 'get',
    path: '/studies/{id}/notes',
    who: 'signed in',
    summary: 'Notes of a study, newest first.',
    query: api.pageQuery.extend({ questionId: api.note.shape.id.optional() }),
    answer: api.page(api.note),
    async run({ services, viewer, params, query }) {
      await needAccess(services, viewer.person.id, params['id']!, 'read');
      return services.store.studies.notes(params['id']!, query.questionId ?? null, {
        after: query.after,
        limit: query.limit ?? DEFAULT_ITEMS,
      });
    },
  }),
  route({
    method: 'post',
    path: '/studies/{id}/notes',
    who: 'signed in',
    summary: 'Add a note.',
    body: api.noteMake,
    answer: api.note,
    status: 201,
    async run({ services, viewer, params, body }) {
      await needAccess(services, viewer.person.id, params['id']!, 'read');
      return services.store.studies.addNote(viewer.person, params['id']!, body.text, body.questionId ?? null);
    },
  }),
];
