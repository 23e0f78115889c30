/** All parcels of a check are done: the checker's last word on the bytes as written. */
import { runServed } from '@palmette/threads';
import type { Desk } from './desk.ts';
import { account, settle } from './endings.ts';
import type { HeldParcel } from './held-parcel.ts';
import { inTree } from './forest.ts';
import { draftShelf } from './shelves.ts';
import { NoBook, readBook } from './stage-book.ts';

export async function conclude(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  const { toCheck } = readBook(lease.stageResults);
  if (toCheck === null) throw new NoBook('a check was made of a certificate whose facts are not there');
  const { counts, cpuMs } = await desk.patience.untilAnswered('the parcels of a check', () => gather(held, desk));
  const job = { kind: 'conclude', certificate: toCheck.sha256, counts } as const;
  const { checker, sha256 } = await held.run(
    runServed(desk.engine, job, { certificate: draftShelf(desk, lease.searchId) }),
  );
  await account(held, desk, checker);
  await settle(held, desk, {
    facts: toCheck.facts,
    certificate: 'draft',
    sha256,
    checker: { ...checker, cpuMs: checker.cpuMs + cpuMs },
  });
}

/** For each tree of the draft what the checker's parcels counted. */
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
    counts: counts.map(({ nodes, orbits }) => ({ nodes: nodes.toString(), orbits: orbits.toString() })),
    cpuMs: parcels.reduce((sum, parcel) => sum + parcel.cpuMs, 0),
  };
}
