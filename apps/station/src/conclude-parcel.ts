/** All parcels of a check are done: the checker's last word on the bytes as written. */
import type { Desk } from './desk.ts';
import { account, settle } from './endings.ts';
import type { HeldParcel } from './held-parcel.ts';
import { inTree } from './forest.ts';
import { NoBook, readBook } from './stage-book.ts';

export async function conclude(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  const { toCheck } = readBook(lease.stageResults);
  if (toCheck === null) throw new NoBook('a check was made of a certificate whose facts are not there');
  const { certificate, counts, cpuMs } = await desk.patience.untilAnswered('the parcels of a check', () =>
    gather(held, desk),
  );
  const { checker } = await held.run(desk.engine.run({ kind: 'conclude', certificate, counts }));
  await account(held, desk, checker);
  await settle(held, desk, { ...toCheck, certificate, checker: { ...checker, cpuMs: checker.cpuMs + cpuMs } });
}

/** The draft, and for each of its trees what the checker's parcels counted. */
async function gather({ lease }: HeldParcel, { work }: Desk) {
  const parcels = await work.parcels(lease.searchId, 'checking', lease.stage);
  const counts: { nodes: bigint; orbits: bigint }[] = [];
  for (const parcel of parcels) {
    const { tree } = inTree(parcel);
    while (counts.length <= tree) counts.push({ nodes: 0n, orbits: 0n });
    counts[tree]!.nodes += parcel.nodes;
    counts[tree]!.orbits += parcel.orbits;
  }
  return {
    certificate: await work.draft(lease.searchId),
    counts: counts.map(({ nodes, orbits }) => ({ nodes: nodes.toString(), orbits: orbits.toString() })),
    cpuMs: parcels.reduce((sum, parcel) => sum + parcel.cpuMs, 0),
  };
}
