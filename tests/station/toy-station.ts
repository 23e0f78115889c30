/** A station process with the toy engine: what the tests start, freeze and kill. */
import { runStationProcess } from '@palmette/station';
import { openToyEngine } from './toy-engine.ts';

await runStationProcess((config) => openToyEngine(config.workers));
