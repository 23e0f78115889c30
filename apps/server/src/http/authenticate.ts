/** Who calls: a cookie for the browser, a bearer token for scripts. Roles are read at each request. */
import type { Request } from 'express';
import { Refusal } from '@palmette/contracts';
import type { Services } from '../services.ts';
import { readSession, SESSION_COOKIE, sha256Hex } from '../tokens.ts';
import type { Viewer, Who } from './route.ts';

export async function viewerOf(services: Services, request: Request): Promise<Viewer | null> {
  const header = request.headers.authorization;
  if (header !== undefined) {
    const token = /^Bearer ([A-Za-z0-9_-]{20,200})$/.exec(header)?.[1];
    const person = token === undefined ? null : await services.store.people.byToken(sha256Hex(token));
    return person === null || !person.active ? null : { person, via: 'token' };
  }
  const cookie = (request.cookies as Record<string, string> | undefined)?.[SESSION_COOKIE];
  const claims = cookie === undefined ? null : readSession(services.config.sessionSecret, cookie);
  if (claims === null) return null;
  const person = await services.store.people.byId(claims.personId);
  if (person === null || !person.active || person.tokenVersion !== claims.version) return null;
  return { person, via: 'cookie' };
}

/** @throws Refusal `signed-out` or `forbidden` */
export function admit(who: Who, viewer: Viewer | null): void {
  if (who === 'anyone') return;
  if (viewer === null) throw new Refusal('signed-out', 'expected somebody who is signed in, found nobody');
  const { role } = viewer.person;
  if (who === 'admin' && role !== 'admin') throw new Refusal('forbidden', `expected an admin, found a ${role}`);
  if (who === 'researcher' && role === 'reader')
    throw new Refusal('forbidden', 'expected a researcher, found a reader');
}

/** A browser that carries the cookie must come from our own pages when it changes something. */
export function checkOrigin(request: Request, viewer: Viewer | null): void {
  if (request.method === 'GET' || request.method === 'HEAD' || viewer?.via === 'token') return;
  const site = request.headers['sec-fetch-site'];
  if (site !== undefined && site !== 'same-origin' && site !== 'none')
    throw new Refusal('forbidden', 'a change has to come from this site');
  const origin = request.headers.origin;
  if (origin === undefined) return;
  let host: string;
  try {
    host = new URL(origin).host;
  } catch {
    host = '';
  }
  if (host !== request.headers.host) throw new Refusal('forbidden', 'a change has to come from this site');
}
