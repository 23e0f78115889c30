/** A station as a process: settings from the environment, lines of JSON on stdout, stops on a signal. */
import { pino } from 'pino';
import { ConfigFault, readConfig, type StationConfig } from './config.ts';
import type { Engine } from './engine.ts';
import { openStation, type OpenStation } from './open-station.ts';

export async function runStationProcess(openEngine: (config: StationConfig) => Engine): Promise<void> {
  const log = pino({ name: 'station' });
  let config: StationConfig;
  try {
    config = readConfig(process.env);
  } catch (error) {
    if (!(error instanceof ConfigFault)) throw error;
    log.fatal(error.message);
    process.exitCode = 2;
    return;
  }
  let station: OpenStation | null = null;
  let stopping = false;
  const stop = (signal: string) => {
    if (stopping || station === null) process.exit(stopping ? 1 : 0);
    stopping = true;
    log.info({ signal }, 'finishing');
    station.stop().then(
      () => process.exit(0),
      (error: unknown) => {
        log.fatal({ fault: String(error) }, 'stopped badly');
        process.exit(1);
      },
    );
  };
  for (const signal of ['SIGTERM', 'SIGINT', 'SIGHUP']) process.on(signal, stop);
  try {
    station = await openStation(config, openEngine(config), log);
  } catch (error) {
    log.fatal({ fault: String(error) }, 'could not start');
    process.exit(1);
  }
}
