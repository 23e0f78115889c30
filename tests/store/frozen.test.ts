/** A process that freezes while it holds the lock of the claims must not stop everybody. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';
import { expect, it } from 'vitest';
import { openFixture } from './fixture.ts';

const NAME = 'palmette test frozen';
const f = await openFixture();
const ines = await f.person('Ines');
const studyId = await f.study(ines);

it('a station that is frozen inside a claim loses the lock, and nothing that it wanted is leased', async () => {
  await f.ask(ines, studyId);
  const [frozen, other] = [await f.station(), await f.station()];
  const root = fileURLToPath(new URL('../..', import.meta.url));
  const child = spawn(
    process.execPath,
    [
      '--conditions=source',
      '--import',
      'tsx',
      'tests/store/frozen-station.ts',
      JSON.stringify({ ...f.options, applicationName: NAME }),
      frozen,
    ],
    { cwd: root, stdio: ['ignore', 'pipe', 'inherit'] },
  );
  try {
    // its claim waits for the search's row, with the lock of the claims in hand
    await f.sql('begin');
    await f.sql('select 1 from search for update');
    await once(child.stdout, 'data');
    const waits = (what: string) =>
      f.sql(`select 1 from pg_stat_activity where application_name = $1 and ${what}`, [NAME]);
    await f.until('it waits', async () => (await waits(`wait_event_type = 'Lock'`)).length > 0);
    child.kill('SIGSTOP');
    await f.sql('rollback');
    await f.until(
      'it is idle in its transaction',
      async () => (await waits(`state = 'idle in transaction'`)).length > 0,
    );

    const lease = await f.claim(other);
    expect(lease).toMatchObject({ phase: 'choosing', attempt: 1 });
    expect(await f.sql('select station_id from parcel')).toEqual([{ station_id: other }]);
  } finally {
    child.kill('SIGKILL');
    await once(child, 'exit');
  }
});
