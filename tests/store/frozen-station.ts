/** Run as a process by frozen.test.ts: claims once, and is frozen in the middle of it. */
import { openStore, type StoreOptions } from '@palmette/store';

const [options, station] = process.argv.slice(2) as [string, string];
const store = await openStore({ ...(JSON.parse(options) as StoreOptions), onError: () => {} });
process.stdout.write('ready\n');
await store.work.claim(station, { freeWorkers: 1, revisions: [1], canRunAlone: true }).catch(() => null);
await store.close();
