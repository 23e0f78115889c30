import { describe, expect, it } from 'vitest';
import type { QuestionSummary } from '@palmette/contracts';
import { questionsCsv } from './questions-csv.ts';

const question: QuestionSummary = {
  id: 'q1',
  studyId: 's1',
  title: '=1+1, "quoted"',
  sourceKind: 'montesinos',
  sourceLabel: 'P(3, 5, −7)',
  target: { least: {} },
  scope: 'all',
  state: 'settled',
  verdict: 'embeds',
  ground: 'exhaustion',
  reason: null,
  rank: 8,
  dimension: 9,
  orbits: '1',
  total: '185794560',
  complete: true,
  askedBy: 'Ada N.',
  mine: true,
  createdAt: '2026-03-03T22:10:00Z',
  endedAt: null,
  cpuSeconds: 0.004,
};

describe('questions as CSV', () => {
  it('have a row each, with quotes where RFC 4180 wants them and no formula', () => {
    const [head, row, last] = questionsCsv([question]).split('\r\n');
    expect(head!.startsWith('id,title,source,kind,target,scope,state,verdict,ground')).toBe(true);
    expect(row).toBe(
      `q1,"'=1+1, ""quoted""","P(3, 5, -7)",montesinos,"{""least"":{}}",all,settled,embeds,exhaustion,8,9,1,185794560,true,0.004,Ada N.,2026-03-03T22:10:00Z,`,
    );
    expect(last).toBe('');
  });

  it('are a head alone where there is none', () => {
    expect(questionsCsv([]).split('\r\n')).toHaveLength(2);
  });
});
