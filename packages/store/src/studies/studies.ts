/** Studies and their members. Nobody, not even an admin, sees a study of which they are no member. */
import { randomUUID } from 'node:crypto';
import { Refusal, type Access, type Study } from '@palmette/contracts';
import { audit } from '../audit.ts';
import { pageOf, readCursor } from '../cursor.ts';
import type { Database, Transaction } from '../database.ts';
import type { Actor, StudiesStore } from '../door.ts';
import { memberEntity, studyEntity } from '../entities/index.ts';
import { isId } from '../people/person-row.ts';
import type { Nudges } from '../queue/nudges.ts';
import { studyNotes } from './notes.ts';
import { touchStudy } from './touch-study.ts';

interface StudyRow {
  id: string;
  title: string;
  access: Access;
  created_at: Date;
  changed_at: Date;
  changed_key: string;
  embeds: number;
  excluded: number;
  open: number;
  searching: number;
}

const SEEN = `
  select t.id, t.title, m.access, t.created_at, t.changed_at, t.changed_at::text as changed_key, c.*
  from study t
  join member m on m.study_id = t.id and m.person_id = $1
  cross join lateral (
    select count(*) filter (where s.verdict = 'embeds')::int as embeds,
           count(*) filter (where s.verdict = 'excluded')::int as excluded,
           count(*) filter (where s.verdict = 'open' and s.state not in ('waiting', 'searching'))::int as open,
           count(*) filter (where s.state in ('waiting', 'searching'))::int as searching
    from question q join search s on s.question_id = q.id where q.study_id = t.id) c
  where t.deleted_at is null`;

export function openStudies(database: Database, nudges: Nudges): StudiesStore {
  return {
    ...studyNotes(database),

    make: (by, title) =>
      database.transaction(async (tx) => {
        const id = randomUUID();
        await tx.manager.insert(studyEntity, { id, title, createdBy: by.id });
        await tx.manager.insert(memberEntity, { studyId: id, personId: by.id, access: 'lead' });
        await audit(tx, by, 'make study', id);
        const [row] = await tx.query<StudyRow>(`${SEEN} and t.id = $2`, [by.id, id]);
        return shown(row!);
      }),

    async list(personId, { after, limit }) {
      const cursor = readCursor(after, 2);
      const rows = await database.query<StudyRow>(
        `${SEEN} ${cursor === null ? '' : 'and (t.changed_at, t.id) < ($3::timestamptz, $4::uuid)'}
         order by t.changed_at desc, t.id desc limit $2`,
        [personId, limit + 1, ...(cursor ?? [])],
      );
      return pageOf(rows, limit, (row) => [row.changed_key, row.id], shown);
    },

    async get(personId, studyId) {
      if (!isId(studyId)) return null;
      const [row] = await database.query<StudyRow>(`${SEEN} and t.id = $2`, [personId, studyId]);
      return row === undefined ? null : shown(row);
    },

    async access(personId, studyId) {
      if (!isId(studyId)) return null;
      const [row] = await database.query<{ access: Access }>(
        `select m.access from member m join study t on t.id = m.study_id
         where m.person_id = $1 and m.study_id = $2 and t.deleted_at is null`,
        [personId, studyId],
      );
      return row?.access ?? null;
    },

    async rename(by, studyId, title) {
      await database.transaction(async (tx) => {
        await tx.change('update study set title = $2, changed_at = now() where id = $1', [studyId, title]);
        await audit(tx, by, 'rename study', studyId);
      });
    },

    async bin(by, studyId) {
      await database.transaction(async (tx) => {
        await holdSearches(tx, by, studyId);
        await nudges.notify(tx);
        await tx.change('update study set deleted_at = now() where id = $1 and deleted_at is null', [studyId]);
        await audit(tx, by, 'bin study', studyId);
      });
    },

    async members(studyId) {
      const rows = await database.query<{ id: string; email: string; name: string; access: Access; letters: boolean }>(
        `select p.id, p.email, p.name, m.access, m.letters
         from member m join person p on p.id = m.person_id where m.study_id = $1
         order by array_position(array['lead', 'coauthor', 'reader'], m.access), lower(p.name), p.id`,
        [studyId],
      );
      return rows.map(({ id, email, name, access, letters }) => ({ person: { id, email, name }, access, letters }));
    },

    async putMember(by, studyId, personId, access) {
      await database.transaction(async (tx) => {
        await lockStudy(tx, studyId);
        if (access !== 'lead') await keepALead(tx, studyId, personId);
        await tx.change(
          `insert into member (study_id, person_id, access) values ($1, $2, $3)
           on conflict (study_id, person_id) do update set access = excluded.access`,
          [studyId, personId, access],
        );
        await touchStudy(tx, studyId);
        await audit(tx, by, 'put member', studyId, `${personId}: ${access}`);
      });
    },

    async removeMember(by, studyId, personId) {
      await database.transaction(async (tx) => {
        await lockStudy(tx, studyId);
        await keepALead(tx, studyId, personId);
        const removed = isId(personId)
          ? await tx.change('delete from member where study_id = $1 and person_id = $2', [studyId, personId])
          : 0;
        if (removed === 0) throw new Refusal('not-found', 'this person is no member of the study');
        await audit(tx, by, 'remove member', studyId, personId);
      });
    },
  };
}

/** Nobody sees a binned study, so nothing of it runs. */
async function holdSearches(tx: Transaction, by: Actor, studyId: string): Promise<void> {
  const open = await tx.query<{ id: string }>(
    `select s.id from search s join question q on q.id = s.question_id
     where q.study_id = $1 and s.state in ('waiting', 'searching') order by s.id for no key update of s`,
    [studyId],
  );
  const ids = open.map(({ id }) => id);
  await tx.change(`update search set state = 'held', held_by = $2 where id = any($1)`, [ids, by.id]);
  await tx.change(`update parcel set yield_wanted = true where search_id = any($1) and state = 'leased'`, [ids]);
}

/** Changes of members one at a time, so that two leads cannot remove each other. */
async function lockStudy(tx: Transaction, studyId: string): Promise<void> {
  const found = await tx.query('select 1 from study where id = $1 and deleted_at is null for no key update', [studyId]);
  if (found.length === 0) throw new Refusal('not-found', 'there is no such study');
}

async function keepALead(tx: Transaction, studyId: string, personId: string): Promise<void> {
  const leads = await tx.query<{ person_id: string }>(
    "select person_id from member where study_id = $1 and access = 'lead'",
    [studyId],
  );
  if (leads.length > 0 && leads.every((lead) => lead.person_id === personId))
    throw new Refusal('conflict', 'a study keeps at least one lead: make another member lead first');
}

function shown({ id, title, access, embeds, excluded, open, searching, ...row }: StudyRow): Study {
  return {
    id,
    title,
    access,
    changedAt: row.changed_at.toISOString(),
    createdAt: row.created_at.toISOString(),
    counts: { embeds, excluded, open, searching },
  };
}
