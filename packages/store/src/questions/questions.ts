/** Questions as members of their study see them. */
import type { Database } from '../database.ts';
import { pageOf, readCursor } from '../cursor.ts';
import type { QuestionsStore } from '../door.ts';
import { isId } from '../people/person-row.ts';
import type { Nudges } from '../queue/nudges.ts';
import { certificateOf } from '../certificates/certificates.ts';
import { ask } from './ask.ts';
import { cover } from './cover.ts';
import { viewQuestion } from './question-view.ts';
import { extend, hold, resume, withdraw } from './steer.ts';
import { SEEN_QUESTIONS, SUMMARY_COLUMNS, summary, type SummaryRow } from './summary.ts';

export interface QuestionsContext {
  readonly database: Database;
  readonly nudges: Nudges;
  readonly poolTimeZone: string;
}

/** What a waiting search shows (its place) changes without a write of its own: looked at anew this often. */
const WAITING_LOOK_SECONDS = 5;

export function openQuestions(context: QuestionsContext): QuestionsStore {
  const { database } = context;
  return {
    ask: (by, question) => ask(context, by, question),

    async list(personId, studyId, { after, limit }) {
      const cursor = readCursor(after, 2);
      if (!isId(studyId)) return { items: [], next: null };
      const rows = await database.query<SummaryRow>(
        `select ${SUMMARY_COLUMNS} from ${SEEN_QUESTIONS} where q.study_id = $2
         ${cursor === null ? '' : 'and (q.created_at, q.id) < ($4::timestamptz, $5::uuid)'}
         order by q.created_at desc, q.id desc limit $3`,
        [personId, studyId, limit + 1, ...(cursor ?? [])],
      );
      return pageOf(rows, limit, (row) => [row.created_key, row.id], summary);
    },

    async byIds(personId, ids) {
      const rows = await database.query<SummaryRow>(
        `select ${SUMMARY_COLUMNS} from ${SEEN_QUESTIONS} where q.id = any($2::uuid[])`,
        [personId, ids.filter(isId)],
      );
      const byId = new Map(rows.map((row) => [row.id, row]));
      return [...new Set(ids)].flatMap((id) => {
        const row = byId.get(id.toLowerCase());
        return row === undefined ? [] : [summary(row)];
      });
    },

    view: (personId, questionId) => viewQuestion(context, personId, questionId),

    async progressSeq(personId, questionId) {
      if (!isId(questionId)) return null;
      const [row] = await database.query<{ seq: string; look: string | null }>(
        `select g.seq, case when s.state = 'waiting'
                            then floor(extract(epoch from now()) / $3)::bigint end as look
         from question q
         join member m on m.study_id = q.study_id and m.person_id = $1
         join study t on t.id = q.study_id and t.deleted_at is null
         join search s on s.question_id = q.id
         join progress g on g.search_id = s.id
         where q.id = $2`,
        [personId, questionId, WAITING_LOOK_SECONDS],
      );
      if (row === undefined) return null;
      return row.look === null ? row.seq : `${row.seq}.${row.look}`;
    },

    cover: (questionId) => cover(database, questionId),
    certificate: (questionId) => certificateOf(database, questionId),
    hold: (by, questionId) => hold(context, by, questionId),
    resume: (by, questionId) => resume(context, by, questionId),
    withdraw: (by, questionId) => withdraw(context, by, questionId),
    extend: (by, questionId, cpuMs) => extend(context, by, questionId, cpuMs),
  };
}
