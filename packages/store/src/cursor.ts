/** Cursors of keyset pages: where the page before ended, as an opaque word. */
import { Refusal, type Page } from '@palmette/contracts';

export interface PageRequest {
  readonly after?: string | undefined;
  readonly limit: number;
}

/** The values of the sort key of the last item, or null on the first page. @throws Refusal `shape` */
export function readCursor(after: string | undefined, length: number): string[] | null {
  if (after === undefined) return null;
  try {
    const key: unknown = JSON.parse(Buffer.from(after, 'base64url').toString('utf8'));
    if (Array.isArray(key) && key.length === length && key.every((part) => typeof part === 'string')) return key;
  } catch {
    // refused below, like every other cursor that this store did not make
  }
  throw new Refusal('shape', `expected the cursor of an earlier page, found ${JSON.stringify(after)}`, '/after');
}

/** One row more than the page was read, to know whether there is a next one. */
export function pageOf<Row, T>(
  rows: readonly Row[],
  limit: number,
  keyOf: (row: Row) => readonly string[],
  itemOf: (row: Row) => T,
): Page<T> {
  const shown = rows.slice(0, limit);
  const last = shown.at(-1);
  return {
    items: shown.map(itemOf),
    next:
      rows.length > limit && last !== undefined
        ? Buffer.from(JSON.stringify(keyOf(last)), 'utf8').toString('base64url')
        : null,
  };
}
