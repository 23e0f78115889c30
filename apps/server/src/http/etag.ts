/** Conditional answers: what the caller already has is not sent again. */
import { createHash } from 'node:crypto';
import type { Request, Response } from 'express';

/** Sets the tag; true if the caller has it already, and then 304 has been sent. */
export function hasAlready(request: Request, response: Response, tag: string): boolean {
  const etag = `"${tag}"`;
  response.setHeader('ETag', etag);
  response.setHeader('Cache-Control', 'private, no-cache');
  const known = request.headers['if-none-match'];
  if (known === undefined || !known.split(',').some((k) => k.trim().replace(/^W\//, '') === etag)) return false;
  response.status(304).end();
  return true;
}

/** A tag from the answer itself, for lists that have no counter of their own. */
export function tagOf(value: unknown): string {
  return createHash('sha256').update(JSON.stringify(value)).digest('base64url').slice(0, 22);
}
