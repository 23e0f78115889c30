import { SEARCH_STATES } from '@palmette/contracts';
import { describe, expect, it } from 'vitest';
import { markOf, refusalIn, stateHeading, stateLead, verdictInTable, type StateFacts } from './states.ts';

const searching: StateFacts = {
  state: 'searching',
  reason: null,
  target: { dimension: 27 },
  scope: 'all',
  rank: 25,
  budgetCpuSeconds: 28_800,
  heldBy: null,
  progress: {
    phase: 'listing',
    share: 0.61,
    shareRange: [0.55, 0.68],
    orbitsFound: '0',
    place: null,
    waitReason: null,
    cpuSeconds: 48_660,
    nodes: '8412690113',
  },
};
const waiting = (progress: Partial<StateFacts['progress']>): StateFacts => ({
  ...searching,
  state: 'waiting',
  progress: { ...searching.progress, ...progress },
});

describe('a search that is not settled', () => {
  it('denies any conclusion while it runs', () => {
    expect(stateHeading(searching)).toBe('Open: searching for every way into Z^{27}');
    expect(stateLead(searching)).toBe(
      'Nothing found yet says nothing about the answer: 39% of the tree is still to be searched.',
    );
  });

  it('does not take what was found for the whole list', () => {
    expect(stateLead({ ...searching, progress: { ...searching.progress, orbitsFound: '4' } })).toBe(
      '4 orbits found so far; the list is not complete: 39% of the tree is still to be searched.',
    );
  });

  it('that used its budget says how far it came and that it can go on (LOOK-DETAIL.md 6, number 5)', () => {
    expect(stateLead({ ...searching, state: 'spent' })).toBe(
      'The search used its 8 h of CPU time. About 61% of the tree is done (55% to 68%). Nothing can be concluded. It can go on from here.',
    );
  });

  it('that waits says for what', () => {
    expect(stateHeading(waiting({ nodes: '0', cpuSeconds: 0 }))).toBe('Open: waiting to begin');
    expect(stateLead(waiting({ place: 3, waitReason: 'turn' }))).toContain('Its place in turn is 3.');
    expect(stateLead({ ...waiting({ waitReason: 'allowance' }), dayEndsAt: '00:00' })).toContain(
      'The allowance for today is used up. It goes on at 00:00; nothing is lost.',
    );
    expect(stateLead(waiting({ waitReason: 'pool' }))).toContain('nothing is lost');
  });

  it('says who holds it', () => {
    expect(stateLead({ ...searching, state: 'held', heldBy: 'Ada N.' })).toContain('Held by Ada N.');
  });

  it('shows no verdict of a broken search', () => {
    const broken: StateFacts = { ...searching, state: 'broken', reason: 'two methods disagree' };
    expect(stateHeading(broken)).toBe('Broken');
    expect(stateLead(broken)).toContain('Two methods disagree. This is a fault and no answer');
  });

  it('names both results where two methods disagree', () => {
    const reason = 'two methods disagree at n = 7: rows list 3 orbits (set 0a), frames list 2 orbits (set 0b)';
    const broken: StateFacts = { ...searching, state: 'broken', reason };
    expect(stateHeading(broken)).toBe('Broken: two methods disagree');
    const told = `a worker that ran a part of this search ended 3 times (${reason}). Ask again`;
    expect(stateLead({ ...broken, reason: told })).toBe(stateLead(broken));
    expect(stateLead(broken)).toBe(
      'At n = 7: rows list 3 orbits (set 0a), frames list 2 orbits (set 0b). One of them is wrong, which is a fault of Palmette and no answer. Both results are kept. No verdict is shown until this is explained.',
    );
  });

  it('says what to mend in a question that is refused when it begins', () => {
    const reason =
      'refused: /method this method cannot answer the question: frames need n = rank. Ask again with this mended';
    expect(refusalIn(reason)).toEqual({
      path: '/method',
      message: 'this method cannot answer the question: frames need n = rank',
    });
    const broken: StateFacts = { ...searching, state: 'broken', reason };
    expect(stateHeading(broken)).toMatch(/^Refused/);
    expect(stateLead(broken)).toContain('frames need n = rank (/method of the question). Nothing was searched');
    expect(refusalIn('refused: the matrix is not symmetric')).toEqual({
      path: '',
      message: 'the matrix is not symmetric',
    });
    expect(refusalIn(null)).toBeNull();
    expect(refusalIn('two methods disagree')).toBeNull();
  });

  it('never reads as a no in any state', () => {
    for (const state of SEARCH_STATES.filter((s) => s !== 'settled')) {
      const words = `${stateHeading({ ...searching, state })} ${stateLead({ ...searching, state })} ${verdictInTable({ state, verdict: 'open' })}`;
      expect(words).not.toMatch(/excluded|does not embed/i);
      expect(markOf({ state, verdict: 'open' })).toMatch(/open|searching/);
    }
  });

  it('shows the verdict once it is settled', () => {
    expect(verdictInTable({ state: 'settled', verdict: 'excluded' })).toBe('excluded');
    expect(markOf({ state: 'settled', verdict: 'embeds' })).toBe('embeds');
  });
});
