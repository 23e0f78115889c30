/** One's own account: name, letters, appearance, password, tokens for scripts. */
import { api, Refusal, type Account } from '@palmette/contracts';
import type { PersonRow } from '@palmette/store';
import { route } from '../../http/route.ts';
import { makeApiToken, SESSION_COOKIE, sha256Hex, signSession } from '../../tokens.ts';
import { personView } from '../session/session-routes.ts';

function accountView(row: PersonRow): Account {
  return { person: personView(row), letters: row.letters, appearance: row.appearance };
}

export const accountRoutes = [
  route({
    method: 'get',
    path: '/account',
    who: 'signed in',
    summary: 'The account of whoever is signed in.',
    answer: api.account,
    run: async ({ viewer }) => accountView(viewer.person),
  }),
  route({
    method: 'patch',
    path: '/account',
    who: 'signed in',
    summary: 'Change name, letters or appearance.',
    body: api.accountChange,
    answer: api.account,
    async run({ services, viewer, body }) {
      const { name, letters, appearance } = body;
      return accountView(
        await services.store.people.change(viewer.person.id, {
          ...(name === undefined ? {} : { name }),
          ...(letters === undefined ? {} : { letters }),
          ...(appearance === undefined ? {} : { appearance }),
        }),
      );
    },
  }),
  route({
    method: 'post',
    path: '/account/password',
    who: 'signed in',
    summary: 'Change the password; other sessions end.',
    body: api.passwordChange,
    status: 204,
    guarded: true,
    async run({ services, viewer, body, response }) {
      if (!(await services.passwords.matches(body.current, viewer.person.passwordHash))) {
        throw new Refusal('wrong-password', 'the current password is another one', '/current');
      }
      const row = await services.store.people.setPassword(viewer.person.id, await services.passwords.hash(body.next));
      if (viewer.via === 'cookie') {
        const { token, maxAgeMs } = signSession(services.config.sessionSecret, {
          personId: row.id,
          version: row.tokenVersion,
        });
        response.cookie(SESSION_COOKIE, token, {
          httpOnly: true,
          sameSite: 'lax',
          secure: services.config.secureCookie,
          maxAge: maxAgeMs,
          path: '/',
        });
      }
    },
  }),
  route({
    method: 'get',
    path: '/account/tokens',
    who: 'signed in',
    summary: 'Tokens for scripts; secrets are never shown again.',
    answer: api.page(api.apiToken),
    run: async ({ services, viewer }) => ({ items: await services.store.people.tokens(viewer.person.id), next: null }),
  }),
  route({
    method: 'post',
    path: '/account/tokens',
    who: 'signed in',
    summary: 'Make a token for scripts; its secret is shown once.',
    body: api.apiTokenMake,
    answer: api.apiTokenMade,
    status: 201,
    async run({ services, viewer, body }) {
      const token = makeApiToken();
      return { ...(await services.store.people.makeToken(viewer.person.id, body.name, sha256Hex(token))), token };
    },
  }),
  route({
    method: 'delete',
    path: '/account/tokens/{id}',
    who: 'signed in',
    summary: 'Withdraw a token.',
    status: 204,
    async run({ services, viewer, params }) {
      if (!(await services.store.people.revokeToken(viewer.person.id, params['id']!)))
        throw new Refusal('not-found', 'there is no such token');
    },
  }),
];
