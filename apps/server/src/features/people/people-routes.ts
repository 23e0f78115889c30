/** People, for the admin: invitations, roles, allowances. */
import { api, Refusal, type PersonAdmin } from '@palmette/contracts';
import { invitationLetter } from '@palmette/wording';
import { route } from '../../http/route.ts';
import type { Services } from '../../services.ts';
import { makeKey, sha256Hex } from '../../tokens.ts';

async function adminView(services: Services, personId: string): Promise<PersonAdmin> {
  const found = (await services.store.people.listForAdmin()).find((p) => p.id === personId);
  if (found === undefined) throw new Refusal('not-found', 'there is no such person');
  return found;
}

export const peopleRoutes = [
  route({
    method: 'get',
    path: '/people',
    who: 'admin',
    summary: 'Everybody with role, allowance and use.',
    answer: api.page(api.personAdmin),
    run: async ({ services }) => ({ items: await services.store.people.listForAdmin(), next: null }),
  }),
  route({
    method: 'post',
    path: '/people/invitations',
    who: 'admin',
    summary: 'Invite somebody by e-mail.',
    body: api.invitationMake,
    answer: api.personAdmin,
    status: 201,
    async run({ services, viewer, body }) {
      const key = makeKey();
      const letter = invitationLetter({
        name: body.name,
        by: viewer.person.name,
        link: `${services.publicUrl()}/invitation/${key}`,
      });
      const person = await services.store.people.invite(viewer.person, {
        ...body,
        keySha256: sha256Hex(key),
        letter: { recipient: body.email, ...letter },
      });
      return adminView(services, person.id);
    },
  }),
  route({
    method: 'patch',
    path: '/people/{id}',
    who: 'admin',
    summary: 'Change role or activity; bites at the next request of that person.',
    body: api.personChange,
    answer: api.personAdmin,
    async run({ services, viewer, params, body }) {
      await adminView(services, params['id']!);
      if (params['id'] === viewer.person.id)
        throw new Refusal('conflict', 'one’s own role and activity are changed by another admin');
      const { role, active } = body;
      await services.store.people.administer(viewer.person, params['id']!, {
        ...(role === undefined ? {} : { role }),
        ...(active === undefined ? {} : { active }),
      });
      return adminView(services, params['id']!);
    },
  }),
  route({
    method: 'put',
    path: '/people/{id}/allowance',
    who: 'admin',
    summary: 'Cap the workers that one person uses at once, and the CPU time of a day.',
    body: api.allowance,
    answer: api.personAdmin,
    async run({ services, viewer, params, body }) {
      await adminView(services, params['id']!);
      await services.store.people.setAllowance(viewer.person, params['id']!, body);
      return adminView(services, params['id']!);
    },
  }),
];
