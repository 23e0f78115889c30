/** The questions of a study as a CSV file (RFC 4180): a row for each, times in UTC, counts in full. */
import type { QuestionSummary } from '@palmette/contracts';

const COLUMNS: readonly (readonly [string, (question: QuestionSummary) => string | number | boolean | null])[] = [
  ['id', (q) => q.id],
  ['title', (q) => q.title],
  ['source', (q) => q.sourceLabel.replaceAll('−', '-')],
  ['kind', (q) => q.sourceKind],
  ['target', (q) => JSON.stringify(q.target)],
  ['scope', (q) => q.scope],
  ['state', (q) => q.state],
  ['verdict', (q) => q.verdict],
  ['ground', (q) => q.ground],
  ['rank', (q) => q.rank],
  ['dimension', (q) => q.dimension],
  ['orbits', (q) => q.orbits],
  ['total', (q) => q.total],
  ['complete', (q) => q.complete],
  ['cpu_seconds', (q) => q.cpuSeconds],
  ['asked_by', (q) => q.askedBy],
  ['created_at', (q) => q.createdAt],
  ['ended_at', (q) => q.endedAt],
];

export function questionsCsv(questions: readonly QuestionSummary[]): string {
  const lines = questions.map((question) => COLUMNS.map(([, read]) => cell(read(question))).join(','));
  return [COLUMNS.map(([name]) => name).join(','), ...lines, ''].join('\r\n');
}

/** A text that a spreadsheet would take for a formula is made plain by an apostrophe. */
function cell(value: string | number | boolean | null): string {
  if (value === null) return '';
  const text = typeof value === 'string' && /^[=+@\t]/.test(value) ? `'${value}` : String(value);
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
