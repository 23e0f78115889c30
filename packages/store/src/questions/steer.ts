/** Hold, resume, withdraw, extend: each decided under the lock of the search's row, so it can never meet an ending. */
import { Refusal, SEARCH_TRANSITIONS, type SearchState } from '@palmette/contracts';
import { audit } from '../audit.ts';
import type { Transaction } from '../database.ts';
import type { Actor } from '../door.ts';
import { isId } from '../people/person-row.ts';
import { touchStudy } from '../studies/touch-study.ts';
import { changedState } from '../work/progress.ts';
import type { QuestionsContext } from './questions.ts';

interface Steered {
  id: string;
  study_id: string;
  state: SearchState;
}

export function hold(context: QuestionsContext, by: Actor, questionId: string): Promise<void> {
  return steer(context, by, questionId, 'hold', async (tx, search) => {
    must(search, 'held', 'held');
    await tx.change(`update search set state = 'held', held_by = $2, reason = null where id = $1`, [search.id, by.id]);
    await tx.change(`update parcel set yield_wanted = true where search_id = $1 and state = 'leased'`, [search.id]);
  });
}

export function resume(context: QuestionsContext, by: Actor, questionId: string): Promise<void> {
  return steer(context, by, questionId, 'resume', async (tx, search) => {
    if (search.state !== 'held') throw wrongState(search, 'resumed');
    await tx.change(
      `update search set held_by = null, state = case
         when exists (select 1 from parcel where search_id = $1 and state = 'leased') then 'searching' else 'waiting' end
       where id = $1`,
      [search.id],
    );
    await tx.change(`update parcel set yield_wanted = false where search_id = $1 and state = 'leased'`, [search.id]);
  });
}

export function withdraw(context: QuestionsContext, by: Actor, questionId: string): Promise<void> {
  return steer(context, by, questionId, 'withdraw', async (tx, search) => {
    must(search, 'withdrawn', 'withdrawn');
    await tx.change(
      `update search set state = 'withdrawn', reason = null, held_by = null, ended_at = clock_timestamp() where id = $1`,
      [search.id],
    );
    await tx.change(
      `update parcel set state = 'unneeded', station_id = null, yield_wanted = false
       where search_id = $1 and state in ('waiting', 'leased')`,
      [search.id],
    );
  });
}

/**
 * Adds to the budget; the plan and everything that was found stay. A spent search waits again, with the addition counted
 * from where it stopped; one that is not spent yet goes on as it is.
 */
export function extend(context: QuestionsContext, by: Actor, questionId: string, cpuMs: number): Promise<void> {
  return steer(context, by, questionId, 'extend', async (tx, search) => {
    const more = Math.round(cpuMs);
    if (search.state === 'spent') return extendSpent(tx, search, more);
    if (!CAN_GROW.includes(search.state)) throw wrongState(search, 'extended');
    const grown = await tx.change(
      'update search set budget_cpu_ms = budget_cpu_ms + $2 where id = $1 and budget_cpu_ms is not null',
      [search.id, more],
    );
    if (grown === 0) throw new Refusal('state', 'this search has no budget that could be extended');
  });
}

const CAN_GROW: readonly SearchState[] = ['waiting', 'searching', 'held'];

async function extendSpent(tx: Transaction, search: Steered, more: number): Promise<void> {
  await tx.change(
    `update search set ending_no = ending_no + 1, reason = null, ended_at = null,
       budget_cpu_ms = case when budget_cpu_ms is not null then greatest(budget_cpu_ms, cpu_ms) + $2 end,
       state = case
         when exists (select 1 from parcel where search_id = $1 and state = 'leased') then 'searching' else 'waiting' end
     where id = $1`,
    [search.id, more],
  );
  await tx.change(`update parcel set yield_wanted = false where search_id = $1 and state = 'leased'`, [search.id]);
}

/** Only members who may ask may steer. The row of the search is locked until the change is committed. */
async function steer(
  { database, nudges }: QuestionsContext,
  by: Actor,
  questionId: string,
  action: string,
  change: (tx: Transaction, search: Steered) => Promise<void>,
): Promise<void> {
  await database.transaction(async (tx) => {
    const [search] = isId(questionId)
      ? await tx.query<Steered & { access: string }>(
          `select s.id, q.study_id, s.state, m.access from search s
           join question q on q.id = s.question_id
           join study t on t.id = q.study_id and t.deleted_at is null
           join member m on m.study_id = q.study_id and m.person_id = $2
           where q.id = $1 for no key update of s`,
          [questionId, by.id],
        )
      : [];
    if (search === undefined) throw new Refusal('not-found', 'there is no such question');
    if (by.role === 'reader' || search.access === 'reader')
      throw new Refusal('forbidden', 'a reader changes nothing in a study');
    await change(tx, search);
    await changedState(tx, search.id);
    await touchStudy(tx, search.study_id);
    await audit(tx, by, action, questionId);
    // for the threads that run it, and for work that became possible
    if (action === 'resume' || action === 'extend') await nudges.work(tx);
    else await nudges.notify(tx);
  });
}

function must(search: Steered, next: SearchState, word: string): void {
  if (!SEARCH_TRANSITIONS[search.state].includes(next)) throw wrongState(search, word);
}

function wrongState({ state }: Steered, word: string): Refusal {
  return new Refusal('state', `a search that is ${state} cannot be ${word}`);
}
