/** Puts a station together: store, engine, letters. Everything is passed in, so that tests can run another engine. */
import { openStore } from '@palmette/store';
import { endingLetter } from '@palmette/wording';
import type { StationConfig } from './config.ts';
import type { Engine } from './engine.ts';
import { LetterSender } from './letters.ts';
import type { Log } from './log.ts';
import { Patience } from './patience.ts';
import { Station } from './station.ts';
import { WriteSpool } from './write-spool.ts';

export interface OpenStation {
  readonly id: string;
  /** Finish and stand by, then close everything. */
  stop(): Promise<void>;
}

export async function openStation(config: StationConfig, engine: Engine, log: Log): Promise<OpenStation> {
  const patience = new Patience(log);
  const store = await patience.untilAnswered('the store', () =>
    openStore({
      databaseUrl: config.databaseUrl,
      schema: config.schema,
      applicationName: `palmette station ${config.name}`,
      defaultAllowance: config.defaultAllowance,
      poolTimeZone: config.timeZone,
      onError: (error) => log.error({ fault: String(error) }, 'the store reports a fault'),
    }),
  );
  const station = new Station({
    config,
    work: store.work,
    pool: store.pool,
    engine,
    letters: (ending) => endingLetter(ending, { publicUrl: config.publicUrl, timeZone: config.timeZone }),
    patience,
    spool: new WriteSpool(config.spoolFolder, log),
    log,
  });
  const sender =
    config.smtpUrl === null
      ? null
      : new LetterSender(
          store.letters,
          { smtpUrl: config.smtpUrl, from: config.mailFrom, lookEveryMs: config.sweepSeconds * 1000 },
          patience,
          log,
        );
  const unlisten =
    sender === null ? null : await patience.untilAnswered('nudges', () => store.work.onNudge(() => sender.soon()));
  await station.start();
  sender?.start();
  return {
    id: station.id,
    async stop() {
      await station.stop();
      await unlisten?.();
      await sender?.stop();
      await engine.close();
      await store.close();
    },
  };
}
