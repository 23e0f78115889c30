import { randomUUID } from 'node:crypto';
import type { LetterDraft } from './door.ts';
import { auditEntity, letterEntity } from './entities/index.ts';
import type { Transaction } from './database.ts';

/** Who did what, in the transaction that does it. */
export async function audit(
  tx: Transaction,
  by: { readonly id: string } | null,
  action: string,
  subject: string,
  detail = '',
): Promise<void> {
  await tx.manager.insert(auditEntity, { personId: by?.id ?? null, action, subject, detail });
}

/** A letter in the transaction of what it is about. Its Message-ID stays the same however often it has to be sent. */
export async function insertLetter(
  tx: Transaction,
  about: { personId: string; searchId: string | null; ending: string; endingNo: number },
  letter: LetterDraft,
): Promise<void> {
  const id = randomUUID();
  await tx.manager
    .createQueryBuilder()
    .insert()
    .into(letterEntity)
    .values({ id, ...about, ...letter, messageId: `<${id}@palmette.letters>` })
    .orIgnore()
    .execute();
}
