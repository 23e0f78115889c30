/** What can go wrong between this page and the server. `code` is stable; the message is made for people. */
import type { ErrorCode } from '@palmette/contracts';

/** The server answered with a refusal. `path` is a JSON Pointer into the body that was sent. */
export class ApiError extends Error {
  override readonly name = 'ApiError';
  constructor(
    readonly status: number,
    readonly code: ErrorCode,
    message: string,
    readonly path?: string,
  ) {
    super(message);
  }
}

/** The server did not answer, or not in its own words: it is away, or something stands between. */
export class UnreachableError extends Error {
  override readonly name = 'UnreachableError';
  readonly code = 'unreachable';
  constructor(cause?: unknown) {
    super('The server does not answer. What you see may be old; nothing is lost.', { cause });
  }
}

/** True for a request that this page itself gave up, because the reader went elsewhere. */
export function isAborted(error: unknown): boolean {
  return error instanceof DOMException && error.name === 'AbortError';
}

/** One sentence for the screen. */
export function errorSentence(error: unknown): string {
  if (error instanceof ApiError) return sentence(error.message);
  if (error instanceof UnreachableError) return error.message;
  return error instanceof Error ? sentence(error.message) : 'Something failed and left no reason.';
}

function sentence(text: string): string {
  const capital = text.charAt(0).toUpperCase() + text.slice(1);
  return /[.!?]$/.test(capital) ? capital : `${capital}.`;
}
