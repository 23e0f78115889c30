/** Signing in and out, and who is signed in. */
import { api, Refusal, type Person } from '@palmette/contracts';
import type { PersonRow } from '@palmette/store';
import { route } from '../../http/route.ts';
import { viewerOf } from '../../http/authenticate.ts';
import { SESSION_COOKIE, signSession } from '../../tokens.ts';

export function personView(row: PersonRow): Person {
  return { id: row.id, email: row.email, name: row.name, role: row.role };
}

export const sessionRoutes = [
  route({
    method: 'post',
    path: '/session',
    who: 'anyone',
    summary: 'Sign in; sets the session cookie.',
    body: api.signIn,
    answer: api.session,
    guarded: true,
    async run({ services, body, response }) {
      const row = await services.store.people.byEmail(body.email);
      const matches = await services.passwords.matches(body.password, row?.active === true ? row.passwordHash : null);
      if (row === null || !matches) throw new Refusal('wrong-password', 'e-mail and password do not belong together');
      await services.store.people.seen(row.id);
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
      return { person: personView(row) };
    },
  }),
  route({
    method: 'get',
    path: '/session',
    who: 'anyone',
    summary: 'Who is signed in.',
    answer: api.session,
    async run({ services, request }) {
      const viewer = await viewerOf(services, request);
      if (viewer === null) throw new Refusal('signed-out', 'nobody is signed in');
      return { person: personView(viewer.person) };
    },
  }),
  route({
    method: 'delete',
    path: '/session',
    who: 'anyone',
    summary: 'Sign out.',
    status: 204,
    async run({ response }) {
      response.clearCookie(SESSION_COOKIE, { path: '/' });
    },
  }),
];
