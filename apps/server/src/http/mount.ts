/** Mounts the routes: admission, body, run, answer, in this order. */
import express, { Router, type Request, type Response } from 'express';
import { rateLimit, ipKeyGenerator } from 'express-rate-limit';
import { LIMITS, readStrictJson, Refusal, validate } from '@palmette/contracts';
import type { Services } from '../services.ts';
import { admit, checkOrigin, viewerOf } from './authenticate.ts';
import type { Route, Viewer } from './route.ts';

const SMALL_BODY = 256 * 1024;
const GUARD_WINDOW_MS = 15 * 60_000;
const GUARD_FAILURES = 20;

export function mountRoutes(services: Services, routes: readonly Route[]): Router {
  const router = Router();
  const small = express.text({ type: () => true, limit: SMALL_BODY });
  const document = express.text({ type: () => true, limit: LIMITS.questionCharacters });
  const guard = rateLimit({
    windowMs: GUARD_WINDOW_MS,
    limit: GUARD_FAILURES,
    skipSuccessfulRequests: true,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    keyGenerator: (request) => `${ipKeyGenerator(request.ip ?? '')} ${emailIn(request.body)}`,
    handler: () => {
      throw new Refusal('too-many', 'too many attempts; try again in a quarter of an hour');
    },
  });
  for (const route of routes) {
    const path = route.path.replaceAll(/\{(\w+)\}/g, ':$1');
    const takesBody = route.body !== undefined || route.document === true;
    // who may call is decided before a body is read
    router[route.method](
      path,
      async (request: Request, response: Response, next) => {
        const viewer = await viewerOf(services, request);
        checkOrigin(request, viewer);
        admit(route.who, viewer);
        response.locals['viewer'] = viewer;
        next();
      },
      ...(takesBody ? [route.document === true ? document : small] : []),
      ...(route.guarded === true ? [guard] : []),
      (request: Request, response: Response) => answer(services, route, request, response),
    );
  }
  return router;
}

/** The e-mail that a sign-in is about, so that one address cannot lock out another. */
function emailIn(body: unknown): string {
  return /"email"\s*:\s*"([^"]{1,254})"/.exec(typeof body === 'string' ? body : '')?.[1]?.toLowerCase() ?? '';
}

async function answer(services: Services, route: Route, request: Request, response: Response): Promise<void> {
  const text = typeof request.body === 'string' ? request.body : '';
  const body =
    route.document === true
      ? text
      : route.body === undefined
        ? undefined
        : validate(route.body, text === '' ? {} : readStrictJson(text));
  const query = route.query === undefined ? undefined : validate(route.query, { ...request.query });
  const result = await route.run({
    services,
    viewer: response.locals['viewer'] as Viewer,
    params: request.params as Record<string, string>,
    query,
    body,
    request,
    response,
  });
  if (response.headersSent || response.writableEnded) return;
  const status = route.status ?? 200;
  if (status === 204 || result === undefined) response.status(status === 200 ? 204 : status).end();
  else response.status(status).json(result);
}
