/**
 * Settled, spent, broken. Which ending a search has is decided once, under the lock of its row; the letters about it
 * are in the same transaction.
 */
import { SEARCH_TRANSITIONS } from '@palmette/contracts';
import { insertCertificate, keepCertificate } from '../certificates/certificates.ts';
import { draftToCertificate } from '../certificates/drafts.ts';
import type { Transaction } from '../database.ts';
import type { LetterWriter, VerdictWrite } from '../door.ts';
import { touchStudy } from '../studies/touch-study.ts';
import { lockSearch, settleDown } from './lease.ts';
import { writeLetters } from './letters-about.ts';
import { changedState } from './progress.ts';
import type { WorkContext } from './work-context.ts';

type Ending = 'settled' | 'spent' | 'broken';

/** False if the search had ended, is held or spent: then its parcel waits and is done again when the search goes on. */
export async function settle(
  context: WorkContext,
  searchId: string,
  verdict: VerdictWrite,
  letters: LetterWriter,
): Promise<boolean> {
  const { certificate } = verdict;
  const { raw, sha256 } = certificate;
  const kept = raw === 'draft' ? null : await keepCertificate(context.database, { sha256, raw });
  return end(context, searchId, 'settled', letters, async (tx) => {
    if (kept === null) await draftToCertificate(tx, searchId, sha256);
    else await insertCertificate(tx, kept);
    await tx.change(
      `insert into search_certificate (search_id, certificate_sha256, checker_line, checker_revision, check_cpu_ms)
       values ($1, $2, $3, $4, $5)`,
      [searchId, sha256, certificate.checkerLine, certificate.checkerRevision, Math.round(certificate.checkCpuMs)],
    );
    await tx.change(
      `update search set verdict = $2, ground = $3, complete = $4, rank = coalesce(rank, $5), dimension = $6, orbits = $7,
         total = $8, method = coalesce(method, $9) where id = $1`,
      [
        searchId,
        verdict.verdict,
        verdict.ground,
        verdict.complete,
        verdict.rank,
        verdict.dimension,
        verdict.orbits?.toString() ?? null,
        verdict.total?.toString() ?? null,
        verdict.method ?? null,
      ],
    );
    await tx.change('delete from draft_chunk where search_id = $1', [searchId]);
    await endParcels(tx, searchId);
  });
}

/** The budget is used up, or the memory. Nothing is lost: waiting parcels wait, running ones are asked to yield. */
export async function spend(
  context: WorkContext,
  searchId: string,
  reason: string,
  letters: LetterWriter,
  onlyIfUsedUp: boolean,
): Promise<boolean> {
  return context.database.transaction(async (tx) => {
    const { cpu_ms, budget_cpu_ms } = await lockSearch(tx, searchId);
    const usedUp = budget_cpu_ms !== null && Number(cpu_ms) >= Number(budget_cpu_ms);
    await giveBackToSpend(tx, searchId);
    return onlyIfUsedUp && !usedUp ? false : spendIn(context, tx, searchId, reason, letters);
  });
}

/** The parcel that was handed out for this has done its work, whatever comes of it. */
async function giveBackToSpend(tx: Transaction, searchId: string): Promise<void> {
  const given = await tx.change(
    `update parcel set state = 'waiting', station_id = null, yield_wanted = false, yield_for = null
     where search_id = $1 and state = 'leased' and to_spend`,
    [searchId],
  );
  if (given > 0) await settleDown(tx, searchId);
}

export async function spendIn(
  context: WorkContext,
  tx: Transaction,
  searchId: string,
  reason: string,
  letters: LetterWriter,
): Promise<boolean> {
  return endIn(context, tx, searchId, 'spent', letters, async () => {
    await tx.change('update search set reason = $2 where id = $1', [searchId, reason]);
    await tx.change(`update parcel set yield_wanted = true where search_id = $1 and state = 'leased'`, [searchId]);
  });
}

/** A fault that trying again cannot mend; the reason says what to do. What was found stays. */
export async function broken(
  context: WorkContext,
  searchId: string,
  reason: string,
  letters: LetterWriter,
): Promise<boolean> {
  return context.database.transaction((tx) => breakIn(context, tx, searchId, reason, letters));
}

export async function breakIn(
  context: WorkContext,
  tx: Transaction,
  searchId: string,
  reason: string,
  letters: LetterWriter,
): Promise<boolean> {
  return endIn(context, tx, searchId, 'broken', letters, async () => {
    await tx.change('update search set reason = $2 where id = $1', [searchId, reason]);
    await endParcels(tx, searchId);
  });
}

async function end(
  context: WorkContext,
  searchId: string,
  ending: Ending,
  letters: LetterWriter,
  write: (tx: Transaction) => Promise<void>,
): Promise<boolean> {
  return context.database.transaction((tx) => endIn(context, tx, searchId, ending, letters, () => write(tx)));
}

async function endIn(
  context: WorkContext,
  tx: Transaction,
  searchId: string,
  ending: Ending,
  letters: LetterWriter,
  write: () => Promise<void>,
): Promise<boolean> {
  const search = await lockSearch(tx, searchId);
  if (!SEARCH_TRANSITIONS[search.state].includes(ending)) {
    await giveBackAssembling(tx, searchId);
    return false;
  }
  await write();
  await tx.change('update search set state = $2, held_by = null, ended_at = clock_timestamp() where id = $1', [
    searchId,
    ending,
  ]);
  await changedState(tx, searchId);
  const [question] = await tx.query<{ study_id: string }>('select study_id from question where id = $1', [
    search.question_id,
  ]);
  await touchStudy(tx, question!.study_id);
  await writeLetters(context, tx, searchId, ending, letters);
  await context.nudges.notify(tx);
  return true;
}

async function endParcels(tx: Transaction, searchId: string): Promise<void> {
  await tx.change(
    `update parcel set station_id = null, yield_wanted = false, yield_for = null,
       state = case when state = 'leased' and phase in ('choosing', 'assembling') then 'done' else 'unneeded' end
     where search_id = $1 and state in ('waiting', 'leased')`,
    [searchId],
  );
}

/** The worker came with an ending that the state does not allow (held, spent): the last step is done again later. */
async function giveBackAssembling(tx: Transaction, searchId: string): Promise<void> {
  await tx.change(
    `update parcel p set state = 'waiting', station_id = null, yield_wanted = false, yield_for = null
     from search s
     where s.id = $1 and s.state in ('held', 'spent') and p.search_id = s.id and p.state = 'leased'
       and p.phase in ('choosing', 'assembling')`,
    [searchId],
  );
}
