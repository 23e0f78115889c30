/** The station: `node --conditions=source --import tsx apps/station/src/main.ts`, or the bundle. */
import { openEngine } from './engine.ts';
import { runStationProcess } from './station-process.ts';

await runStationProcess((config) => openEngine(config.workers));
