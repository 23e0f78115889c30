/** What a station asks of the store: one line a verb, each verb in a file of its own. */
import { keepBlobs } from '../certificates/blobs.ts';
import { draftPiece, keepDraft } from '../certificates/drafts.ts';
import type { WorkStore } from '../door.ts';
import { checkpoint } from './checkpoint.ts';
import { claim } from './claim.ts';
import { crashed } from './crash.ts';
import { broken, settle, spend } from './endings.ts';
import { finish, recut, release, witness } from './finish.ts';
import { found, parcels } from './found.ts';
import { goOn } from './go-on.ts';
import { heartbeat, registerStation, stationStopped } from './heartbeat.ts';
import { sweep } from './sweep.ts';
import type { WorkContext } from './work-context.ts';

export function openWork(context: WorkContext): WorkStore {
  const { database, nudges } = context;
  return {
    registerStation: (station) => registerStation(context, station),
    heartbeat: (stationId, report) => heartbeat(context, stationId, report),
    stationStopped: (stationId) => stationStopped(context, stationId),
    claim: (stationId, options) => claim(context, stationId, options),
    checkpoint: (lease, write) => checkpoint(context, lease, write),
    recut: (lease, mid, shareKept) => recut(context, lease, mid, shareKept),
    release: (lease) => release(context, lease),
    finish: (lease, write, result) => finish(context, lease, write, result),
    witness: (lease, write) => witness(context, lease, write),
    goOn: (searchId, next) => goOn(context, searchId, next),
    found: (searchId, stage, after) => found(database, searchId, stage, after),
    parcels: parcels(database),
    keepBytes: async (raw) => (await keepBlobs(database, [raw])).hashes,
    keepDraft: (searchId, pieces) => keepDraft(database, searchId, pieces),
    draft: (searchId, no) => draftPiece(database, searchId, no),
    settle: (searchId, verdict, letters) => settle(context, searchId, verdict, letters),
    spend: (searchId, reason, letters, onlyIfUsedUp = false) => spend(context, searchId, reason, letters, onlyIfUsedUp),
    broken: (searchId, reason, letters) => broken(context, searchId, reason, letters),
    crashed: (lease, reason, letters) => crashed(context, lease, reason, letters),
    sweep: (options) => sweep(context, options),
    onNudge: (call) => nudges.subscribe(call),
  };
}
