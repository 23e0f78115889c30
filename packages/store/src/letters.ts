/** The outbox. A letter is claimed before it is sent, so two stations never send the same one. */
import type { Database } from './database.ts';
import type { LetterStore } from './door.ts';

/** A sender that is silent for this long has died: the letter goes out again, with the same Message-ID. */
const SENDING_AT_MOST = "interval '2 minutes'";
/** Waits between tries: 2 s, 4 s, 8 s, …, at most ten minutes. */
const NEXT_TRY = "least(interval '10 minutes', interval '1 second' * power(2, least(attempt, 12)))";

type Claimed = NonNullable<Awaited<ReturnType<LetterStore['claim']>>>;

export function openLetters(database: Database): LetterStore {
  return {
    async claim() {
      const [letter] = await database.query<Claimed>(
        `update letter set state = 'sending', attempt = attempt + 1, claimed_at = clock_timestamp()
         where id = (
           select id from letter
           where (state = 'waiting' and not_before <= clock_timestamp())
              or (state = 'sending' and claimed_at < clock_timestamp() - ${SENDING_AT_MOST})
           order by not_before, created_at, id for no key update skip locked limit 1)
         returning id, attempt, recipient, subject, body, message_id as "messageId"`,
      );
      return letter ?? null;
    },

    async sent(id, attempt) {
      // a link that lets somebody in is not kept any longer than it has to be
      await database.change(
        `update letter set state = 'sent', sent_at = clock_timestamp(), fault = null,
           body = case when ending in ('invitation', 'password') then '' else body end
         where id = $1 and attempt = $2 and state = 'sending'`,
        [id, attempt],
      );
    },

    async failed(id, attempt, fault, permanent) {
      await database.change(
        `update letter set state = case when $4 then 'failed' else 'waiting' end, fault = $3,
           not_before = clock_timestamp() + ${NEXT_TRY}
         where id = $1 and attempt = $2 and state = 'sending'`,
        [id, attempt, fault, permanent],
      );
    },
  };
}
