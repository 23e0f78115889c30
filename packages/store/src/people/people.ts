/** Accounts: looking up, inviting, changing, administering. */
import { randomUUID } from 'node:crypto';
import { Refusal, type Allowance } from '@palmette/contracts';
import { audit, insertLetter } from '../audit.ts';
import type { Database, Transaction } from '../database.ts';
import type { PeopleStore, PersonRow } from '../door.ts';
import { allowanceEntity, personEntity, type PersonEntity } from '../entities/index.ts';
import type { Nudges } from '../queue/nudges.ts';
import { lockClaims, yieldAboveCap } from '../work/claim-lock.ts';
import { listForAdmin } from './people-for-admin.ts';
import { apiTokens } from './api-tokens.ts';
import { insertKeyLink, keyLinks } from './key-links.ts';
import { isId, personRow } from './person-row.ts';

export interface PeopleContext {
  readonly database: Database;
  readonly nudges: Nudges;
  readonly defaultAllowance: Allowance;
  readonly poolTimeZone: string;
}

/** How long the link in an invitation can be used. */
const INVITATION_VALID = '14 days';

export function openPeople(context: PeopleContext): PeopleStore {
  const { database, nudges } = context;
  const people = () => database.source.getRepository(personEntity);

  const insert = async (
    tx: Transaction,
    person: Pick<PersonEntity, 'email' | 'name' | 'role' | 'passwordHash'>,
    allowance: Allowance,
  ) => {
    const email = person.email.trim().toLowerCase();
    const taken = await tx.query('select 1 from person where lower(email) = $1', [email]);
    if (taken.length > 0) throw emailTaken(email);
    const id = randomUUID();
    await tx.manager.insert(personEntity, { ...person, id, email });
    await tx.manager.insert(allowanceEntity, { personId: id, ...allowanceColumns(allowance) });
    return personRow(await tx.manager.findOneByOrFail(personEntity, { id }));
  };

  const changed = async (id: string, change: Partial<PersonEntity>): Promise<PersonRow> => {
    if (Object.keys(change).length > 0) await people().update({ id }, change);
    return personRow(await people().findOneByOrFail({ id }));
  };

  return {
    ...keyLinks(context),
    ...apiTokens(database),
    listForAdmin: () => listForAdmin(context),

    async byEmail(email) {
      const found = await people()
        .createQueryBuilder('p')
        .where('lower(p.email) = :email', { email: email.trim().toLowerCase() })
        .getOne();
      return found === null ? null : personRow(found);
    },

    async byId(id) {
      const found = isId(id) ? await people().findOneBy({ id }) : null;
      return found === null ? null : personRow(found);
    },

    async seen(id) {
      // at most one write a minute: this is asked with every request
      await database.change(
        "update person set seen_at = now() where id = $1 and (seen_at is null or seen_at < now() - interval '1 minute')",
        [id],
      );
    },

    invite: (by, { keySha256, letter, ...person }) =>
      unlessTaken(person.email, () =>
        database.transaction(async (tx) => {
          const made = await insert(tx, { ...person, passwordHash: null }, context.defaultAllowance);
          await insertKeyLink(tx, keySha256, 'invitation', made.id, INVITATION_VALID);
          await insertLetter(tx, { personId: made.id, searchId: null, ending: 'invitation', endingNo: 1 }, letter);
          await audit(tx, by, 'invite', made.email, made.role);
          await nudges.notify(tx);
          return made;
        }),
      ),

    create: ({ allowance = context.defaultAllowance, ...person }) =>
      unlessTaken(person.email, () =>
        database.transaction(async (tx) => {
          const made = await insert(tx, person, allowance);
          await audit(tx, null, 'create person', made.email, made.role);
          return made;
        }),
      ),

    async setPassword(personId, passwordHash) {
      return database.transaction(async (tx) => {
        await tx.change('update person set password_hash = $2, token_version = token_version + 1 where id = $1', [
          personId,
          passwordHash,
        ]);
        return personRow(await tx.manager.findOneByOrFail(personEntity, { id: personId }));
      });
    },

    change: (personId, { name, letters, appearance }) =>
      changed(personId, {
        ...(name === undefined ? {} : { name }),
        ...(appearance === undefined ? {} : { appearance }),
        ...(letters === undefined
          ? {}
          : { lettersSettled: letters.settled, lettersSpent: letters.spent, lettersBroken: letters.broken }),
      }),

    administer: (by, personId, change) =>
      database.transaction(async (tx) => {
        // people are locked in one order, so that two admins cannot take the last admin away at the same moment
        const admins = await tx.query<{ id: string }>(
          "select id from person where role = 'admin' and active order by id for no key update",
        );
        const person = isId(personId) ? await tx.manager.findOneBy(personEntity, { id: personId }) : null;
        if (person === null) throw new Refusal('not-found', 'there is no such person');
        const role = change.role ?? person.role;
        const active = change.active ?? person.active;
        const wasAdmin = person.role === 'admin' && person.active;
        if (wasAdmin && !(role === 'admin' && active) && admins.every(({ id }) => id === personId))
          throw new Refusal('conflict', `${person.name} is the last admin: make another one first`);
        await tx.change('update person set role = $2, active = $3, token_version = token_version + 1 where id = $1', [
          personId,
          role,
          active,
        ]);
        await audit(tx, by, 'change person', person.email, describe(person, { role, active }));
        await nudges.notify(tx);
        return personRow(await tx.manager.findOneByOrFail(personEntity, { id: personId }));
      }),

    async setAllowance(by, personId, allowance) {
      await database.transaction(async (tx) => {
        await lockClaims(tx, database.options.schema);
        const person = isId(personId) ? await tx.manager.findOneBy(personEntity, { id: personId }) : null;
        if (person === null) throw new Refusal('not-found', 'there is no such person');
        await tx.manager.upsert(allowanceEntity, { personId, ...allowanceColumns(allowance) }, ['personId']);
        await yieldAboveCap(tx, personId, allowance.workers);
        const detail = `${allowance.workers} workers at once, ${allowance.cpuSecondsPerDay} s of CPU a day`;
        await audit(tx, by, 'set allowance', person.email, detail);
        await nudges.notify(tx);
      });
    },

    async allowance(personId) {
      const row = await database.source.getRepository(allowanceEntity).findOneByOrFail({ personId });
      return { workers: row.workers, cpuSecondsPerDay: Number(row.cpuMsPerDay) / 1000 };
    },
  };
}

function allowanceColumns({ workers, cpuSecondsPerDay }: Allowance) {
  return { workers, cpuMsPerDay: String(Math.round(cpuSecondsPerDay * 1000)) };
}

function emailTaken(email: string): Refusal {
  return new Refusal('conflict', `there is a person with the e-mail ${email} already`, '/email');
}

const UNIQUE_VIOLATION = '23505';

/** Two at the same moment: the second meets the unique index, not the look before it. */
async function unlessTaken<T>(email: string, make: () => Promise<T>): Promise<T> {
  try {
    return await make();
  } catch (error) {
    const { code, constraint } = (error as { driverError?: { code?: string; constraint?: string } }).driverError ?? {};
    if (code === UNIQUE_VIOLATION && constraint === 'person_email') throw emailTaken(email);
    throw error;
  }
}

function describe(before: PersonEntity, after: Pick<PersonEntity, 'role' | 'active'>): string {
  const parts = [];
  if (before.role !== after.role) parts.push(`${before.role} → ${after.role}`);
  if (before.active !== after.active) parts.push(after.active ? 'active again' : 'not active');
  return parts.join(', ');
}
