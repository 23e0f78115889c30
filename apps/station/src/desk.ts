/** What every step of a parcel needs at hand. Wired once in `main.ts`. */
import type { LetterWriter, PoolStore, WorkStore } from '@palmette/store';
import type { StationConfig } from './config.ts';
import type { Engine } from './engine.ts';
import type { Log } from './log.ts';
import type { Patience } from './patience.ts';
import type { WriteSpool } from './write-spool.ts';

export interface Desk {
  readonly config: StationConfig;
  readonly work: WorkStore;
  readonly pool: Pick<PoolStore, 'stations'>;
  readonly engine: Engine;
  readonly letters: LetterWriter;
  readonly patience: Patience;
  readonly spool: WriteSpool;
  readonly log: Log;
}
