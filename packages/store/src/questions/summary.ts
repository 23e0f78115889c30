/** The columns of a question that lists show, and how they go over the wire. */
import type { Ground, QuestionSummary, SearchState, Verdict } from '@palmette/contracts';

export interface SummaryRow {
  id: string;
  study_id: string;
  title: string | null;
  source_kind: string;
  source_label: string;
  target: string;
  scope: 'one' | 'all';
  state: SearchState;
  verdict: Verdict;
  ground: Ground | null;
  reason: string | null;
  rank: number | null;
  dimension: number | null;
  orbits: string | null;
  total: string | null;
  complete: boolean;
  asked_by: string;
  mine: boolean;
  created_at: Date;
  created_key: string;
  ended_at: Date | null;
  cpu_ms: string;
}

/** $1 is the person who looks: only members see. */
export const SUMMARY_COLUMNS = `
  q.id, q.study_id, q.title, q.source_kind, q.source_label, q.target, q.scope, s.state, s.verdict, s.ground, s.reason,
  s.rank, s.dimension, s.orbits, s.total, s.complete, asker.name as asked_by, q.asked_by = $1 as mine, q.created_at,
  q.created_at::text as created_key, s.ended_at, s.cpu_ms`;

export const SEEN_QUESTIONS = `
  question q
  join search s on s.question_id = q.id
  join person asker on asker.id = q.asked_by
  join study t on t.id = q.study_id and t.deleted_at is null
  join member m on m.study_id = q.study_id and m.person_id = $1`;

export function summary(row: SummaryRow): QuestionSummary {
  return {
    id: row.id,
    studyId: row.study_id,
    title: row.title,
    sourceKind: row.source_kind,
    sourceLabel: row.source_label,
    target: JSON.parse(row.target) as QuestionSummary['target'],
    scope: row.scope,
    state: row.state,
    verdict: row.verdict,
    ground: row.ground,
    reason: row.reason,
    rank: row.rank,
    dimension: row.dimension,
    orbits: row.orbits,
    total: row.total,
    complete: row.complete,
    askedBy: row.asked_by,
    mine: row.mine,
    createdAt: row.created_at.toISOString(),
    endedAt: row.ended_at?.toISOString() ?? null,
    cpuSeconds: Number(row.cpu_ms) / 1000,
  };
}
