/** The door for tests, which run a station with an engine that only counts. */
export type { Engine } from './engine.ts';
export type { StationConfig } from './config.ts';
export { runStationProcess } from './station-process.ts';
