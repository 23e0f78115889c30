import type { Cover } from '@palmette/contracts';
import type { Sql } from '../database.ts';
import { isId } from '../people/person-row.ts';

interface Block {
  share: number;
  done: number;
  state: 'done' | 'in hand' | 'waiting';
}

/** A strip of more blocks than this could not be told apart; neighbours are drawn as one. */
const MOST_BLOCKS = 2_000;

/** The cover of the tree that is being listed, or of the checker's tree while that is checked; in address order. */
export async function cover(sql: Sql, questionId: string): Promise<Cover> {
  if (!isId(questionId)) return { parcels: [] };
  const blocks = await sql.query<Block>(
    `with seen as (
       select s.id, s.stage, s.state = 'settled' as settled, exists (
         select 1 from parcel where search_id = s.id and phase = 'checking' and stage = s.stage) as checking
       from search s where s.question_id = $1)
     select p.share, case when p.state = 'done' then 1 else p.share_done end as done,
            case when p.state = 'done' or p.state = 'unneeded' and seen.settled then 'done'
                 when p.state = 'leased' then 'in hand' else 'waiting' end as state
     from seen join parcel p on p.search_id = seen.id and p.stage = seen.stage
       and p.phase = case when seen.checking then 'checking' else 'listing' end
     order by p.from_address`,
    [questionId],
  );
  return { parcels: fewer(blocks).map((block, i) => ({ no: i + 1, ...block })) };
}

/** Joins neighbours in groups of one size; a group is in hand if any of it is. */
function fewer(blocks: readonly Block[]): Block[] {
  const size = Math.ceil(blocks.length / MOST_BLOCKS);
  if (size <= 1) return [...blocks];
  return Array.from({ length: Math.ceil(blocks.length / size) }, (_, i) => {
    const group = blocks.slice(i * size, (i + 1) * size);
    const share = group.reduce((sum, block) => sum + block.share, 0);
    const done = group.reduce((sum, block) => sum + block.share * block.done, 0);
    const state = group.some((b) => b.state === 'in hand')
      ? 'in hand'
      : group.every((b) => b.state === 'done')
        ? 'done'
        : 'waiting';
    return { share, done: share > 0 ? Math.min(1, done / share) : 0, state };
  });
}
