/** Links in letters: invitations and forgotten passwords. */
import { api, Refusal } from '@palmette/contracts';
import { passwordLetter } from '@palmette/wording';
import { route } from '../../http/route.ts';
import { makeKey, sha256Hex } from '../../tokens.ts';

const GONE = 'this link is unknown, was used already, or is too old';

export const invitationRoutes = [
  route({
    method: 'get',
    path: '/keys/{key}',
    who: 'anyone',
    summary: 'What the link in a letter is for.',
    answer: api.keyInfo,
    async run({ services, params }) {
      const link = await services.store.people.keyLink(sha256Hex(params['key']!));
      if (link === null) throw new Refusal('not-found', GONE);
      return { purpose: link.purpose, email: link.person.email, name: link.person.name };
    },
  }),
  route({
    method: 'post',
    path: '/invitations/accept',
    who: 'anyone',
    summary: 'Accept an invitation by choosing a password.',
    body: api.invitationAccept,
    status: 204,
    guarded: true,
    async run({ services, body }) {
      const hash = await services.passwords.hash(body.password);
      if ((await services.store.people.useKeyLink(sha256Hex(body.key), 'invitation', hash, body.name)) === null)
        throw new Refusal('not-found', GONE, '/key');
    },
  }),
  route({
    method: 'post',
    path: '/password/forgotten',
    who: 'anyone',
    summary:
      'Ask for a letter with a link to a new password. The answer is the same whether the e-mail is known or not.',
    body: api.passwordForgotten,
    status: 202,
    guarded: true,
    async run({ services, body }) {
      const person = await services.store.people.byEmail(body.email);
      if (person === null || !person.active || person.passwordHash === null) return;
      const key = makeKey();
      const letter = passwordLetter({ name: person.name, link: `${services.publicUrl()}/password/${key}` });
      await services.store.people.forgotten(person.id, sha256Hex(key), { recipient: person.email, ...letter });
    },
  }),
  route({
    method: 'post',
    path: '/password/reset',
    who: 'anyone',
    summary: 'Set a new password by the link in a letter.',
    body: api.passwordReset,
    status: 204,
    guarded: true,
    async run({ services, body }) {
      const hash = await services.passwords.hash(body.password);
      if ((await services.store.people.useKeyLink(sha256Hex(body.key), 'password', hash)) === null)
        throw new Refusal('not-found', GONE, '/key');
    },
  }),
];
