/**
 * Whether a source has a lattice, asked before a question is accepted. Bounded: what is big or takes long is accepted and
 * judged by the station, so that nobody's request holds the server.
 */
import { Refusal, type Source } from '@palmette/contracts';
import { openThreadPool } from './thread-pool.ts';
import type { LatticeReading } from './threads/read-lattice.ts';

export interface SourceCheck {
  /** @throws Refusal `source` or `limit` with the place, what was expected and what was found */
  check(source: Source): Promise<void>;
  close(): Promise<void>;
}

/** Rows above which the station decides. */
const MOST_ROWS = 300;
const PATIENCE_MS = 3_000;

export function openSourceCheck(): SourceCheck {
  const pool = openThreadPool('read-lattice', { maxThreads: 1, maxQueue: 100 });
  return {
    async check(source) {
      if (rowsAsTyped(source) > MOST_ROWS) return;
      let reading: LatticeReading;
      try {
        reading = (await pool.run(source, { signal: AbortSignal.timeout(PATIENCE_MS) })) as LatticeReading;
      } catch (error) {
        const { name, message } = error as Error;
        if (name === 'AbortError' || name === 'TimeoutError' || message.includes('queue')) return;
        throw error;
      }
      if (reading.fault !== null)
        throw new Refusal(reading.fault.code, reading.fault.message, `/source${reading.fault.path}`);
    },
    close: () => pool.destroy(),
  };
}

function rowsAsTyped(source: Source): number {
  switch (source.kind) {
    case 'matrix':
      return source.rows.length;
    case 'tree':
      return source.vertices.length;
    case 'diagram':
      return source.pd.length;
    case 'graph':
      return source.edges.length;
    case 'sum':
      return source.of.reduce((sum, part) => sum + rowsAsTyped(part), 0);
    default:
      return 1;
  }
}
