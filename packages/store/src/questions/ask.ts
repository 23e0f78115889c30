/** Accepts a question: question, search, first parcel, progress row and nudge in one transaction. */
import { randomUUID } from 'node:crypto';
import { Refusal } from '@palmette/contracts';
import type { Transaction } from '../database.ts';
import type { Actor, NewQuestion } from '../door.ts';
import { parcelEntity, questionEntity, searchEntity } from '../entities/index.ts';
import { isId } from '../people/person-row.ts';
import { touchStudy } from '../studies/touch-study.ts';
import type { QuestionsContext } from './questions.ts';

type Asked = { readonly id: string; readonly repeated: boolean };

/** Keys are kept this long; after it the same key asks anew. */
const KEY_KEPT = '7 days';

export async function ask({ database, nudges }: QuestionsContext, by: Actor, question: NewQuestion): Promise<Asked> {
  return database.transaction(async (tx) => {
    await mayAsk(tx, by, question.studyId);
    const id = randomUUID();
    if (question.idempotency !== undefined) {
      const earlier = await claimKey(tx, by.id, id, question.studyId, question.idempotency);
      if (earlier !== null) return { id: earlier, repeated: true };
    }
    const { target, scope } = JSON.parse(question.document) as { target: unknown; scope: string };
    await tx.manager.insert(questionEntity, {
      id,
      studyId: question.studyId,
      askedBy: by.id,
      title: question.title,
      document: question.document,
      sourceKind: question.sourceKind,
      sourceLabel: question.sourceLabel,
      target: JSON.stringify(target),
      scope,
    });
    const searchId = randomUUID();
    const budgetCpuMs = question.budgetCpuMs === null ? null : String(Math.round(question.budgetCpuMs));
    await tx.manager.insert(searchEntity, {
      id: searchId,
      questionId: id,
      personId: by.id,
      phase: 'choosing',
      budgetCpuMs,
    });
    await tx.manager.insert(parcelEntity, { searchId, phase: 'choosing', stage: 0, fromAddress: [], toAddress: null });
    await tx.change('insert into progress (search_id) values ($1)', [searchId]);
    await touchStudy(tx, question.studyId);
    await nudges.work(tx);
    return { id, repeated: false };
  });
}

async function mayAsk(tx: Transaction, by: Actor, studyId: string): Promise<void> {
  const [member] = isId(studyId)
    ? await tx.query<{ access: string }>(
        `select m.access from member m join study t on t.id = m.study_id
         where m.study_id = $1 and m.person_id = $2 and t.deleted_at is null`,
        [studyId, by.id],
      )
    : [];
  if (member === undefined) throw new Refusal('not-found', 'there is no such study');
  if (by.role === 'reader' || member.access === 'reader')
    throw new Refusal('forbidden', 'a reader does not ask questions');
}

/** Null if the key is new. Waits for a transaction that uses the same key at this moment. */
async function claimKey(
  tx: Transaction,
  personId: string,
  questionId: string,
  studyId: string,
  { key, bodySha256 }: { readonly key: string; readonly bodySha256: string },
): Promise<string | null> {
  await tx.change(`delete from idempotency where person_id = $1 and key = $2 and at < now() - interval '${KEY_KEPT}'`, [
    personId,
    key,
  ]);
  const made = await tx.change(
    `insert into idempotency (person_id, key, body_sha256, question_id) values ($1, $2, $3, $4) on conflict do nothing`,
    [personId, key, bodySha256, questionId],
  );
  if (made > 0) return null;
  const [earlier] = await tx.query<{ body_sha256: string; question_id: string; study_id: string }>(
    `select i.body_sha256, i.question_id, q.study_id from idempotency i join question q on q.id = i.question_id
     where i.person_id = $1 and i.key = $2`,
    [personId, key],
  );
  if (earlier === undefined || earlier.body_sha256 !== bodySha256 || earlier.study_id !== studyId)
    throw new Refusal('conflict', 'this idempotency key was used for another question: take a new one');
  return earlier.question_id;
}
