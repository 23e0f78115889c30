/**
 * A route as data: what it takes, what it answers and who may call it. The same list mounts the routes and makes the
 * OpenAPI document, so the two cannot differ.
 */
import type { Request, Response } from 'express';
import type { PersonRow } from '@palmette/store';
import type { z } from 'zod';
import type { Services } from '../services.ts';

export type Who = 'anyone' | 'signed in' | 'researcher' | 'admin';

export interface Viewer {
  readonly person: PersonRow;
  readonly via: 'cookie' | 'token';
}

export interface Context<B, Q> {
  readonly services: Services;
  /** Present unless `who` is anyone. */
  readonly viewer: Viewer;
  readonly params: Readonly<Record<string, string>>;
  readonly query: Q;
  readonly body: B;
  readonly request: Request;
  readonly response: Response;
}

export interface RouteOptions<B extends z.ZodType, Q extends z.ZodType, A extends z.ZodType> {
  readonly method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  /** Below /api, with {name} for a parameter. */
  readonly path: string;
  readonly who: Who;
  readonly summary: string;
  readonly body?: B;
  /** The body is a question document, read strictly as text; limits are its own. */
  readonly document?: boolean;
  readonly query?: Q;
  readonly answer?: A;
  readonly status?: 200 | 201 | 202 | 204;
  /** Slows down guessing: calls of one address and e-mail in a quarter of an hour. */
  readonly guarded?: boolean;
  /** Answers `undefined` if it wrote the response itself. */
  readonly run: (context: Context<z.output<B>, z.output<Q>>) => Promise<z.input<A> | void>;
}

export type Route = RouteOptions<z.ZodType, z.ZodType, z.ZodType>;

export function route<
  B extends z.ZodType = z.ZodUndefined,
  Q extends z.ZodType = z.ZodUndefined,
  A extends z.ZodType = z.ZodUndefined,
>(options: RouteOptions<B, Q, A>): Route {
  return options as unknown as Route;
}
