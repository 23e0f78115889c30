/** Links to invite and to set a forgotten password: only the hash of a key is kept, each is used once. */
import { insertLetter } from '../audit.ts';
import type { Transaction } from '../database.ts';
import type { PeopleStore } from '../door.ts';
import { keyLinkEntity, personEntity } from '../entities/index.ts';
import type { PeopleContext } from './people.ts';
import { personRow } from './person-row.ts';

const PASSWORD_LINK_VALID = '1 hour';

/** A key that was not used, has not expired, and whose person is active. */
const GOOD_KEY = `from key_link k join person p on p.id = k.person_id
  where k.key_sha256 = $1 and k.used_at is null and k.expires_at > now() and p.active`;

type KeyLinks = Pick<PeopleStore, 'keyLink' | 'useKeyLink' | 'forgotten'>;

export function keyLinks({ database, nudges }: PeopleContext): KeyLinks {
  return {
    async keyLink(keySha256) {
      const [link] = await database.query<{ purpose: 'invitation' | 'password'; person_id: string }>(
        `select k.purpose, k.person_id ${GOOD_KEY}`,
        [keySha256],
      );
      if (link === undefined) return null;
      const person = await database.source.getRepository(personEntity).findOneByOrFail({ id: link.person_id });
      return { purpose: link.purpose, person: personRow(person) };
    },

    useKeyLink: (keySha256, purpose, passwordHash, name) =>
      database.transaction(async (tx) => {
        const [link] = await tx.query<{ person_id: string }>(
          `select k.person_id ${GOOD_KEY} and k.purpose = $2 for no key update of k`,
          [keySha256, purpose],
        );
        if (link === undefined) return null;
        // every other open link of the person dies with this one
        await tx.change('update key_link set used_at = now() where person_id = $1 and used_at is null', [
          link.person_id,
        ]);
        await tx.change(
          `update person set password_hash = $2, token_version = token_version + 1, name = coalesce($3, name)
           where id = $1`,
          [link.person_id, passwordHash, name ?? null],
        );
        return personRow(await tx.manager.findOneByOrFail(personEntity, { id: link.person_id }));
      }),

    async forgotten(personId, keySha256, letter) {
      await database.transaction(async (tx) => {
        await insertKeyLink(tx, keySha256, 'password', personId, PASSWORD_LINK_VALID);
        await insertLetter(tx, { personId, searchId: null, ending: 'password', endingNo: 1 }, letter);
        await nudges.notify(tx);
      });
    },
  };
}

export async function insertKeyLink(
  tx: Transaction,
  keySha256: string,
  purpose: 'invitation' | 'password',
  personId: string,
  valid: string,
): Promise<void> {
  await tx.manager.insert(keyLinkEntity, {
    keySha256,
    purpose,
    personId,
    expiresAt: () => `now() + interval '${valid}'`,
  });
}
