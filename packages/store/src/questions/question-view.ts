/** One question in full: summary, document, method, certificate, and progress computed from its parcels. */
import type { QuestionView, SearchPhase } from '@palmette/contracts';
import type { QuestionsStore } from '../door.ts';
import { isId } from '../people/person-row.ts';
import { placeInTurn } from './place.ts';
import type { QuestionsContext } from './questions.ts';
import { SEEN_QUESTIONS, SUMMARY_COLUMNS, summary, type SummaryRow } from './summary.ts';

type View = NonNullable<Awaited<ReturnType<QuestionsStore['view']>>>;

interface ViewRow extends SummaryRow {
  search_id: string;
  person_id: string;
  phase: SearchPhase | null;
  document: string;
  method: string | null;
  budget_cpu_ms: string | null;
  held_by: string | null;
  estimate: string | null;
  elapsed: number;
  nodes_per_second: number | null;
  heard_at: Date | null;
  nodes: string;
  stage_nodes: string;
  stage_orbits: string;
  share: number | null;
  done: number;
  in_hand: number;
  waiting: number;
  sha256: string | null;
  bytes: string;
  checker_line: string;
  checker_revision: number;
  check_cpu_ms: string;
  checked_at: Date;
}

const VIEW = `
  select ${SUMMARY_COLUMNS}, s.id as search_id, s.person_id, s.phase, q.document, s.method, s.budget_cpu_ms,
    holder.name as held_by, s.estimate, g.nodes_per_second, g.heard_at, w.*,
    extract(epoch from coalesce(s.ended_at, clock_timestamp()) - s.created_at)::float8 as elapsed,
    k.sha256, k.raw_bytes as bytes, c.checker_line, c.checker_revision, c.check_cpu_ms, c.checked_at
  from ${SEEN_QUESTIONS}
  join progress g on g.search_id = s.id
  left join person holder on holder.id = s.held_by
  left join search_certificate c on c.search_id = s.id
  left join certificate k on k.sha256 = c.certificate_sha256
  cross join lateral (
    select coalesce(sum(p.nodes) filter (where p.phase <> 'checking'), 0) as nodes,
      coalesce(sum(p.nodes) filter (where p.phase = 'listing' and p.stage = s.stage), 0) as stage_nodes,
      coalesce(sum(p.orbits) filter (where p.phase = 'listing' and p.stage = s.stage), 0) as stage_orbits,
      (sum(p.share * case when p.state = 'done' then 1 else p.share_done end)
         filter (where p.phase = s.phase and p.stage = s.stage)
       / nullif(sum(p.share) filter (where p.phase = s.phase and p.stage = s.stage), 0))::float8 as share,
      (count(*) filter (where p.phase = s.phase and p.stage = s.stage and p.state in ('done', 'unneeded')))::int as done,
      (count(*) filter (where p.state = 'leased'))::int as in_hand,
      (count(*) filter (where p.state = 'waiting'))::int as waiting
    from parcel p where p.search_id = s.id) w
  where q.id = $2`;

export async function viewQuestion(
  context: QuestionsContext,
  personId: string,
  questionId: string,
): Promise<View | null> {
  if (!isId(questionId)) return null;
  const [row] = await context.database.query<ViewRow>(VIEW, [personId, questionId]);
  if (row === undefined) return null;
  const turn = row.state === 'waiting' ? await placeInTurn(context, row.search_id) : null;
  return {
    ...summary(row),
    document: row.document,
    method: row.method,
    budgetCpuSeconds: row.budget_cpu_ms === null ? null : Number(row.budget_cpu_ms) / 1000,
    heldBy: row.held_by,
    progress: {
      phase: row.phase,
      elapsedSeconds: Math.max(0, row.elapsed),
      cpuSeconds: Number(row.cpu_ms) / 1000,
      nodes: row.nodes,
      nodesPerSecond: row.nodes_per_second,
      orbitsFound: row.stage_orbits,
      ...treeFigures(row),
      workers: row.in_hand,
      parcels: { done: row.done, inHand: row.in_hand, waiting: row.waiting },
      place: turn?.place ?? null,
      waitReason: turn?.reason ?? null,
      heardAt: row.heard_at?.toISOString() ?? null,
    },
    certificate:
      row.sha256 === null
        ? null
        : {
            sha256: row.sha256,
            bytes: Number(row.bytes),
            checkerLine: row.checker_line,
            checkerRevision: row.checker_revision,
            checkCpuSeconds: Number(row.check_cpu_ms) / 1000,
            checkedAt: row.checked_at.toISOString(),
          },
  };
}

type TreeFigures = Pick<QuestionView['progress'], 'share' | 'shareRange' | 'remainingCpuSeconds'>;

/**
 * The share is what the parcels say; its range is what the estimate of the nodes allows. What remains is the part that
 * is not done of the estimated nodes, at the rate of one worker: CPU time, whatever number of workers.
 */
function treeFigures(row: ViewRow): TreeFigures {
  const inTree = row.phase === 'listing' || row.phase === 'checking';
  const share = inTree && row.share !== null ? Math.min(1, Math.max(0, row.share)) : null;
  if (share === null || row.phase !== 'listing' || row.estimate === null)
    return { share, shareRange: null, remainingCpuSeconds: null };
  const { mean, low, high } = JSON.parse(row.estimate) as { mean: number; low: number; high: number };
  const nodes = Number(row.stage_nodes);
  const ended = row.state !== 'waiting' && row.state !== 'searching' && row.state !== 'held';
  const rate = row.nodes_per_second;
  const remaining = (estimated: number) => ((1 - share) * estimated) / rate!;
  return {
    share,
    shareRange: [Math.min(share, partOf(nodes, high)), Math.max(share, partOf(nodes, low))],
    remainingCpuSeconds:
      ended || rate === null || rate <= 0
        ? null
        : { low: remaining(low), likely: remaining(mean), high: remaining(high) },
  };
}

function partOf(nodes: number, estimated: number): number {
  return estimated > 0 ? Math.min(1, nodes / estimated) : 1;
}
