/** Letters about an ending: to the asker and to the members who want letters, each by their own choices, each once. */
import type { Verdict } from '@palmette/contracts';
import { insertLetter } from '../audit.ts';
import type { Transaction } from '../database.ts';
import type { LetterWriter } from '../door.ts';
import type { WorkContext } from './work-context.ts';

interface About {
  question_id: string;
  title: string | null;
  source_label: string;
  study_title: string;
  verdict: Verdict;
  ground: string | null;
  dimension: number | null;
  orbits: string | null;
  complete: boolean;
  reason: string | null;
  cpu_ms: string;
  started_at: Date;
  ending_no: number;
}

interface Recipient {
  id: string;
  name: string;
  email: string;
}

/** Who still sees the study, is active, and chose letters of this kind. */
const RECIPIENTS = {
  settled: recipients('letters_settled'),
  spent: recipients('letters_spent'),
  broken: recipients('letters_broken'),
} as const;

function recipients(choice: string): string {
  return `select p.id, p.name, p.email from search s
    join question q on q.id = s.question_id
    join study t on t.id = q.study_id and t.deleted_at is null
    join member m on m.study_id = q.study_id
    join person p on p.id = m.person_id
    where s.id = $1 and p.active and p.${choice} and (m.letters or p.id = q.asked_by) order by p.id`;
}

export async function writeLetters(
  { onError }: WorkContext,
  tx: Transaction,
  searchId: string,
  ending: keyof typeof RECIPIENTS,
  write: LetterWriter,
): Promise<void> {
  const [about] = await tx.query<About>(
    `select q.id as question_id, q.title, q.source_label, t.title as study_title, s.verdict, s.ground, s.dimension, s.orbits,
       s.complete, s.reason, s.cpu_ms, coalesce(s.started_at, s.created_at) as started_at, s.ending_no
     from search s join question q on q.id = s.question_id join study t on t.id = q.study_id where s.id = $1`,
    [searchId],
  );
  for (const person of await tx.query<Recipient>(RECIPIENTS[ending], [searchId])) {
    const letter = words(about!, person, ending, write, onError);
    if (letter === null) continue;
    const once = { personId: person.id, searchId, ending, endingNo: about!.ending_no };
    await insertLetter(tx, once, { recipient: person.email, ...letter });
  }
}

/** A fault in the wording must not keep a search from ending. */
function words(
  about: About,
  { name, email }: Recipient,
  ending: keyof typeof RECIPIENTS,
  write: LetterWriter,
  onError: (error: unknown) => void,
): { subject: string; body: string } | null {
  try {
    return write({
      ending,
      person: { name, email },
      question: {
        id: about.question_id,
        title: about.title,
        sourceLabel: about.source_label,
        studyTitle: about.study_title,
      },
      verdict: about.verdict,
      ground: about.ground,
      dimension: about.dimension,
      orbits: about.orbits,
      complete: about.complete,
      reason: about.reason,
      cpuMs: Number(about.cpu_ms),
      startedAt: about.started_at.toISOString(),
    });
  } catch (error) {
    onError(error);
    return null;
  }
}
