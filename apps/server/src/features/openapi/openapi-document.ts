/** The OpenAPI 3.1 document, made from the routes and from the schemas that validate them. */
import { OpenApiGeneratorV31, OpenAPIRegistry, type RouteConfig } from '@asteasolutions/zod-to-openapi';
import { z } from 'zod';
import { api, question } from '@palmette/contracts';
import type { Route } from '../../http/route.ts';

const REFUSED =
  'Refused: the code, a message that says what was expected and what was found, and the path of the field.';

export function openApiDocument(routes: readonly Route[], version: string): object {
  const registry = new OpenAPIRegistry();
  registry.registerComponent('securitySchemes', 'cookie', { type: 'apiKey', in: 'cookie', name: 'palmette_session' });
  registry.registerComponent('securitySchemes', 'token', { type: 'http', scheme: 'bearer' });
  for (const route of routes) registry.registerPath(pathOf(route));
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: {
      title: 'Palmette',
      version,
      description:
        'Does this definite lattice embed in Z^n, in how many ways? Questions in, verdicts and certificates out.',
    },
    servers: [{ url: '/api' }],
  });
}

function pathOf(route: Route): RouteConfig {
  const status = String(route.status ?? 200);
  const json = (schema: z.ZodType) => ({ 'application/json': { schema } });
  const body = route.document === true ? question : route.body;
  const names = [...route.path.matchAll(/\{(\w+)\}/g)].map((m) => m[1]!);
  const error = { description: REFUSED, content: json(api.errorBody) };
  return {
    method: route.method,
    path: route.path,
    summary: route.summary,
    ...(route.who === 'anyone' ? {} : { security: [{ cookie: [] }, { token: [] }] }),
    request: {
      ...(names.length === 0 ? {} : { params: z.object(Object.fromEntries(names.map((n) => [n, z.string()]))) }),
      ...(route.query === undefined ? {} : { query: route.query as z.ZodObject }),
      ...(body === undefined ? {} : { body: { required: true, content: json(body) } }),
      ...(route.document === true ? { headers: z.object({ 'Idempotency-Key': z.string().optional() }) } : {}),
    },
    responses: {
      [status]: { description: route.summary, ...(route.answer === undefined ? {} : { content: json(route.answer) }) },
      ...(body === undefined && route.query === undefined ? {} : { 400: error }),
      ...(route.who === 'anyone' ? {} : { 401: error, 403: error }),
      ...(names.length === 0 ? {} : { 404: error }),
      default: error,
    },
  };
}
