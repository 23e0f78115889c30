/** Error codes of the API and the command line: each stands here once; HTTP statuses are given in the server. */
export const ERROR_CODES = [
  'json', // the text is not JSON as the strict reader accepts it
  'shape', // a field is missing, unknown or of the wrong type
  'integer', // a number is not written as an integer is
  'limit', // a documented bound is exceeded
  'source', // the source has the right shape and no lattice (not symmetric, indefinite, not coprime, …)
  'signed-out',
  'wrong-password',
  'forbidden',
  'not-found',
  'conflict',
  'state', // the search's state does not allow this
  'too-many', // rate limit
  'unsupported',
  'unavailable', // database or queue is away
  'internal',
] as const;
export type ErrorCode = (typeof ERROR_CODES)[number];

export interface ErrorBody {
  readonly error: { readonly code: ErrorCode; readonly message: string; readonly path?: string };
}

/** A refusal: names the place (JSON Pointer), what was expected and what was found. */
export class Refusal extends Error {
  override readonly name = 'Refusal';
  constructor(
    readonly code: ErrorCode,
    message: string,
    readonly path?: string,
  ) {
    super(message);
  }

  toBody(): ErrorBody {
    return {
      error: { code: this.code, message: this.message, ...(this.path === undefined ? {} : { path: this.path }) },
    };
  }
}
