/** Session cookies (signed, with an audience and the person's token version) and the random keys of links and scripts. */
import { createHash, randomBytes } from 'node:crypto';
import jwt from 'jsonwebtoken';

export const SESSION_COOKIE = 'palmette_session';
const SESSION_SECONDS = 14 * 24 * 3600;
const AUDIENCE = 'palmette session';
const TOKEN_PREFIX = 'palmette_';

export interface SessionClaims {
  readonly personId: string;
  readonly version: number;
}

export function signSession(
  secret: string,
  claims: SessionClaims,
): { readonly token: string; readonly maxAgeMs: number } {
  const exp = Math.floor(Date.now() / 1000) + SESSION_SECONDS;
  return {
    token: jwt.sign({ sub: claims.personId, ver: claims.version, aud: AUDIENCE, exp }, secret, { algorithm: 'HS256' }),
    maxAgeMs: SESSION_SECONDS * 1000,
  };
}

/** Null if the token is not ours, changed or expired. */
export function readSession(secret: string, token: string): SessionClaims | null {
  try {
    const claims = jwt.verify(token, secret, { algorithms: ['HS256'], audience: AUDIENCE });
    if (typeof claims === 'string' || typeof claims.sub !== 'string' || typeof claims['ver'] !== 'number') return null;
    return { personId: claims.sub, version: claims['ver'] };
  } catch (error) {
    if (error instanceof jwt.JsonWebTokenError) return null;
    throw error;
  }
}

export function sha256Hex(text: string): string {
  return createHash('sha256').update(text).digest('hex');
}

/** A key for a link in a letter; only its hash is kept. */
export function makeKey(): string {
  return randomBytes(32).toString('base64url');
}

export function makeApiToken(): string {
  return TOKEN_PREFIX + randomBytes(32).toString('base64url');
}
