/** The one place where an error becomes a status. */
import type { NextFunction, Request, Response } from 'express';
import type { Logger } from 'pino';
import { Refusal, type ErrorCode } from '@palmette/contracts';

export const STATUS: Readonly<Record<ErrorCode, number>> = {
  json: 400,
  shape: 400,
  integer: 400,
  limit: 400,
  source: 422,
  'signed-out': 401,
  'wrong-password': 401,
  forbidden: 403,
  'not-found': 404,
  conflict: 409,
  state: 409,
  'too-many': 429,
  unsupported: 415,
  unavailable: 503,
  internal: 500,
};

/** Codes of the driver and the system that mean: the database is away. */
const AWAY = new Set([
  'ECONNREFUSED',
  'ECONNRESET',
  'ENOENT',
  'ETIMEDOUT',
  '57P01',
  '57P02',
  '57P03',
  '08006',
  '08001',
  '08003',
]);

export function refusalOf(error: unknown): Refusal {
  if (error instanceof Refusal) return error;
  const fault = error as {
    type?: string;
    status?: number;
    message?: string;
    code?: string;
    driverError?: { code?: string };
    cause?: { code?: string };
  };
  if (fault.type === 'entity.too.large')
    return new Refusal('limit', `the body is larger than is allowed here: ${fault.message ?? ''}`, '');
  if (
    fault.type?.startsWith('entity.') ||
    fault.type?.startsWith('encoding.') ||
    fault.type?.startsWith('charset.') ||
    fault.type === 'request.aborted'
  )
    return new Refusal('json', 'the body could not be read');
  const codes = [fault.code, fault.driverError?.code, fault.cause?.code];
  if (
    codes.some((code) => code !== undefined && AWAY.has(code)) ||
    /Connection terminated|connect timeout/i.test(fault.message ?? '')
  ) {
    return new Refusal('unavailable', 'the database does not answer at this moment; nothing was changed, try again');
  }
  // a malformed id is an unknown one (PostgreSQL: invalid text representation)
  if (codes.includes('22P02')) return new Refusal('not-found', 'there is nothing at this address');
  if (error instanceof URIError) return new Refusal('not-found', 'there is nothing at this address');
  return new Refusal('internal', 'something went wrong here; it has been noted');
}

export function faultHandler(log: Logger) {
  return (error: unknown, request: Request, response: Response, next: NextFunction): void => {
    const refusal = refusalOf(error);
    if (refusal.code === 'internal') log.error({ err: error, path: request.path }, 'request failed');
    if (response.headersSent) {
      next(error);
      return;
    }
    const tooLarge = (error as { type?: string }).type === 'entity.too.large';
    response.status(tooLarge ? 413 : STATUS[refusal.code]).json(refusal.toBody());
  };
}
