/** What an earlier process in this folder could not write is written now, if it still counts. */
import { FencedOff } from '@palmette/store';
import type { Desk } from './desk.ts';
import { writeThrough } from './write-once.ts';

export async function replaySpool(desk: Desk): Promise<void> {
  for (const unwritten of desk.spool.all()) {
    const { lease, ending } = unwritten;
    const about = { parcel: lease.parcelId, attempt: lease.attempt };
    try {
      await writeThrough(desk, { ...unwritten, ending: ending === 'running' ? 'released' : ending }, true);
      desk.log.info(about, 'wrote a result that an earlier process had kept');
    } catch (error) {
      if (!(error instanceof FencedOff)) throw error;
      desk.log.info(about, 'a kept result came too late: the parcel went on without it');
    }
  }
}
