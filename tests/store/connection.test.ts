/** The database goes away and comes back; servers start at once; builds of different age meet. */
import { afterEach, describe, expect, it } from 'vitest';
import { migrate, openStore, SchemaNameFault, SchemaTooNew, TimeZoneFault } from '@palmette/store';
import { LETTERS, openFixture, plan, verdict, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;
afterEach(() => f.clear());
const ines = await f.person('Ines');
const studyId = await f.study(ines);

/** Ends every connection of one application, as a restart of the database would. */
async function cut(applicationName: string): Promise<number> {
  const ended = await f.sql(
    `select pg_terminate_backend(pid) from pg_stat_activity where application_name = $1 and pid <> pg_backend_pid()`,
    [applicationName],
  );
  return ended.length;
}

describe('a connection that is lost', () => {
  it('comes back by itself: for queries, heartbeats and nudges', async () => {
    const name = 'palmette test of a cut';
    const cutting = await openStore({ ...f.options, applicationName: name });
    try {
      let rings = 0;
      const stop = await cutting.work.onNudge(() => (rings += 1));
      const station = await f.station(1, cutting);
      await cutting.work.heartbeat(station, { busy: 0, memoryBytes: 1, leases: [] });
      expect(await cut(name)).toBeGreaterThan(2);

      await f.until('the heartbeat', () =>
        cutting.work.heartbeat(station, { busy: 0, memoryBytes: 1, leases: [] }).then(
          () => true,
          () => false,
        ),
      );
      await f.until('a query', () => cutting.pool.health().then((h) => h.database && h.queue));
      await f.until('it listens again', async () => {
        const listening = await f.sql(
          `select 1 from pg_stat_activity where application_name = $1 and query like 'listen%'`,
          [name],
        );
        return listening.length > 0 && rings > 0;
      });
      const before = rings;
      await f.ask(ines, studyId);
      await f.until('a nudge', () => rings > before);
      expect((await f.claim(station, cutting))!.phase).toBe('choosing');
      await stop();
      expect(f.errors.splice(0).length).toBeGreaterThan(0); // it was said
    } finally {
      await cutting.close();
    }
  });

  it('reaches the caller as the driver’s error, and a transaction that was open leaves nothing', async () => {
    const name = 'palmette test of a cut transaction';
    const cutting = await openStore({ ...f.options, applicationName: name });
    try {
      const station = await f.station();
      const id = await f.ask(ines, studyId);
      await plan(store, (await f.claim(station))!, 1);
      const lease = (await f.claim(station))!;
      // the write waits for the search's row, which this connection holds
      await f.sql('begin');
      await f.sql('select 1 from search where id = $1 for update', [lease.searchId]);
      const write = cutting.work.finish(lease, written({ nodes: 5n }), null).then(
        () => null,
        (error: unknown) => error as { code?: string; driverError?: { code?: string } },
      );
      await f.until(
        'the write waits',
        async () =>
          (
            await f.sql(`select 1 from pg_stat_activity where application_name = $1 and wait_event_type = 'Lock'`, [
              name,
            ])
          ).length > 0,
      );
      await cut(name);
      const error = (await write)!;
      expect(error.driverError?.code ?? error.code).toBe('57P01');
      await f.sql('rollback');
      expect((await store.work.parcels(lease.searchId, 'listing', 1))[0]).toMatchObject({ nodes: 0n });
      await f.until('the same write again', () =>
        cutting.work.finish(lease, written({ nodes: 5n }), null).catch(() => false),
      );
      expect((await store.work.parcels(lease.searchId, 'listing', 1))[0]).toMatchObject({ nodes: 5n });
      await store.questions.withdraw(ines, id);
      f.errors.splice(0);
    } finally {
      await cutting.close();
    }
  });
});

describe('nudges', () => {
  it('are in the transaction: a question wakes everybody who listens, a refused one nobody', async () => {
    let rings = 0;
    const listening = await f.another();
    const stop = await listening.work.onNudge(() => (rings += 1));
    await f.ask(ines, studyId);
    await f.until('the nudge', () => rings > 0);
    await f.until('the queue is empty', async () => {
      const [row] = await f.sql<{ n: string }>(
        `select count(*) as n from ${f.options.schema}_queue.job where state = 'created'`,
      );
      return row!.n === '0';
    });
    await expect(f.ask(ines, crypto.randomUUID())).rejects.toMatchObject({ code: 'not-found' });
    expect(await f.sql(`select 1 from ${f.options.schema}_queue.job where state = 'created'`)).toEqual([]);
    await stop();
    const heard = rings;
    await f.ask(ines, studyId);
    await new Promise((resolve) => setImmediate(resolve));
    expect(rings).toBe(heard);
  });

  it('come for hold, withdraw, release, settling and a letter', async () => {
    let rings = 0;
    const listening = await f.another();
    const stop = await listening.work.onNudge(() => (rings += 1));
    const station = await f.station();
    const id = await f.ask(ines, studyId);
    const ringsAfter = async (what: string, act: () => Promise<unknown>) => {
      await f.until(`quiet before ${what}`, async () => {
        const before = rings;
        await f.sql('select pg_sleep(0.05)');
        return rings === before;
      });
      const before = rings;
      await act();
      await f.until(what, () => rings > before);
    };
    await ringsAfter('hold', () => store.questions.hold(ines, id));
    await ringsAfter('resume', () => store.questions.resume(ines, id));
    const lease = (await f.claim(station))!;
    await ringsAfter('release', () => store.work.release(lease));
    const again = (await f.claim(station))!;
    await ringsAfter('settle', () => store.work.settle(again.searchId, verdict(), LETTERS));
    await ringsAfter('standing by', () => store.pool.standBy(ines, station, true));
    await ringsAfter('forgotten password', () =>
      store.people.forgotten(ines.id, 'key', { recipient: 'x', subject: 'y', body: 'z' }),
    );
    await stop();
  });
});

describe('the schema', () => {
  it('is made once, however many servers start at the same moment', async () => {
    const schema = `${f.options.schema}_m`;
    const options = { ...f.options, schema };
    const waiting = openStore(options); // a station that is early waits
    await Promise.all([migrate(options), migrate(options), migrate(options)]);
    const early = await waiting;
    expect(await early.pool.health()).toMatchObject({ database: true, queue: true });
    expect(await f.sql(`select name from ${schema}.migration`)).toHaveLength(2);

    // a newer build has migrated: this one does not begin, and a station of this one stands by
    const station = await f.station(1, early);
    expect((await early.work.heartbeat(station, { busy: 0, memoryBytes: 1, leases: [] })).standBy).toBe(false);
    await f.sql(`insert into ${schema}.migration (timestamp, name) values (1, 'newer')`);
    expect((await early.work.heartbeat(station, { busy: 0, memoryBytes: 1, leases: [] })).standBy).toBe(true);
    await expect(openStore(options)).rejects.toBeInstanceOf(SchemaTooNew);
    await expect(migrate(options)).rejects.toBeInstanceOf(SchemaTooNew);
    await early.close();
    await f.sql(`drop schema ${schema} cascade; drop schema ${schema}_queue cascade`);
  });

  it('has a plain name, and the pool a time zone that exists', async () => {
    await expect(openStore({ ...f.options, schema: 'a"; drop' })).rejects.toBeInstanceOf(SchemaNameFault);
    await expect(openStore({ ...f.options, poolTimeZone: 'Atlantis/Port' })).rejects.toBeInstanceOf(TimeZoneFault);
  });
});
