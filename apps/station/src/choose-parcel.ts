/** The first look at a question: settled at once where it is small, else a plan and a first cover. */
import type { Desk } from './desk.ts';
import { account, breakDown, settle } from './endings.ts';
import type { HeldParcel } from './held-parcel.ts';
import { writeBook } from './stage-book.ts';

export async function choose(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  const quickCpuMs = Math.min(desk.config.quickCpuMs, lease.budgetLeftMs ?? Number.POSITIVE_INFINITY);
  const end = await held.run(desk.engine.run({ kind: 'choose', document: lease.document, quickCpuMs }));
  switch (end.kind) {
    case 'refused':
      return breakDown(
        held,
        desk,
        `refused: ${end.path === undefined ? '' : `${end.path} `}${end.message}. Ask again with this mended`,
      );
    case 'settled':
      await account(held, desk, end);
      return settle(held, desk, end);
    case 'planned': {
      const { stage, results, estimate, parcels } = end.ahead;
      await account(held, desk, end);
      await desk.patience.untilAnswered('a plan', () =>
        desk.work.goOn(lease.searchId, {
          phase: 'listing',
          stage: stage.no,
          stageResults: writeBook({ stage, results, toCheck: null }),
          facts: { rank: end.rank, method: end.method, plan: end.plan, estimate: JSON.stringify(estimate) },
          parcels,
        }),
      );
    }
  }
}
