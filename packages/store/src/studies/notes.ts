import { randomUUID } from 'node:crypto';
import { Refusal, type Note } from '@palmette/contracts';
import { pageOf, readCursor } from '../cursor.ts';
import type { Database } from '../database.ts';
import type { StudiesStore } from '../door.ts';
import { noteEntity } from '../entities/index.ts';
import { isId } from '../people/person-row.ts';
import { touchStudy } from './touch-study.ts';

interface NoteRow {
  id: string;
  text: string;
  by: string;
  at: Date;
  at_key: string;
  question_id: string | null;
}

const NOTES = `select n.id, n.text, p.name as by, n.at, n.at::text as at_key, n.question_id
  from note n join person p on p.id = n.person_id where n.study_id = $1`;

/** Notes of a study, or of one of its questions; the newest first. */
export function studyNotes(database: Database): Pick<StudiesStore, 'notes' | 'addNote'> {
  return {
    async notes(studyId, questionId, { after, limit }) {
      if (questionId !== null && !isId(questionId)) return { items: [], next: null };
      const cursor = readCursor(after, 2);
      const rows = await database.query<NoteRow>(
        `${NOTES} and ($3::uuid is null or n.question_id = $3)
         ${cursor === null ? '' : 'and (n.at, n.id) < ($4::timestamptz, $5::uuid)'}
         order by n.at desc, n.id desc limit $2`,
        [studyId, limit + 1, questionId, ...(cursor ?? [])],
      );
      return pageOf(rows, limit, (row) => [row.at_key, row.id], shown);
    },

    addNote: (by, studyId, text, questionId) =>
      database.transaction(async (tx) => {
        if (questionId !== null) {
          const inStudy = isId(questionId)
            ? await tx.query('select 1 from question where id = $1 and study_id = $2', [questionId, studyId])
            : [];
          if (inStudy.length === 0)
            throw new Refusal('not-found', 'there is no such question in this study', '/questionId');
        }
        const id = randomUUID();
        await tx.manager.insert(noteEntity, { id, studyId, questionId, personId: by.id, text });
        await touchStudy(tx, studyId);
        const [row] = await tx.query<NoteRow>(`${NOTES} and n.id = $2`, [studyId, id]);
        return shown(row!);
      }),
  };
}

function shown({ id, text, by, at, question_id }: NoteRow): Note {
  return { id, text, by, at: at.toISOString(), questionId: question_id };
}
