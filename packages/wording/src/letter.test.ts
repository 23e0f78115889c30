import { describe, expect, it } from 'vitest';
import { endingLetter, type EndingFacts } from './letter.ts';
import { cpuTimeInWords, momentInWords } from './letter-time.ts';

const place = { publicUrl: 'https://palmette.example', timeZone: 'UTC' };
const facts: EndingFacts = {
  ending: 'settled',
  person: { name: 'Mei' },
  question: { id: 'q1', title: 'a pretzel', sourceLabel: 'P(3, 5, −7)', studyTitle: 'Pretzels' },
  verdict: 'embeds',
  ground: 'exhaustion',
  dimension: 9,
  orbits: '1',
  complete: true,
  reason: null,
  cpuMs: (13 * 60 + 31) * 60_000,
  startedAt: '2026-03-03T22:10:00Z',
};

describe('the letter about an ending', () => {
  it('has the verdict as its subject and says ground, list, time and link (LOOK-DETAIL.md 6, number 15)', () => {
    const letter = endingLetter(facts, place);
    expect(letter.subject).toBe('Embeds in Z^9: P(3, 5, −7)');
    expect(letter.body).toContain(
      'The search that was started on 3 March at 22:10 (UTC) is settled. Embeds in Z^9, one orbit, list complete. Ground: exhaustion; checked. 13 h 31 min of CPU time.',
    );
    expect(letter.body).toContain('https://palmette.example/questions/q1');
    expect(letter.body).toContain('letters are on for settled searches; change it on your account page');
  });

  it('never shows a spent budget as a no (number 16)', () => {
    const letter = endingLetter({ ...facts, ending: 'spent', verdict: 'open', ground: null, dimension: null }, place);
    expect(letter.subject).toBe('Open, budget used up: P(3, 5, −7)');
    expect(letter.body.startsWith('This is not a no.')).toBe(true);
    expect(letter.body).not.toContain('Excluded');
  });

  it('says when one embedding is all that was looked for, and when no Z^n is possible', () => {
    const one = endingLetter({ ...facts, complete: false, orbits: null, dimension: 12, ground: 'embedding' }, place);
    expect(one.body).toContain('Embeds in Z^12. One embedding was found; others were not looked for.');
    const none = endingLetter({ ...facts, verdict: 'excluded', dimension: null, orbits: '0' }, place);
    expect(none.subject).toBe('Excluded from every Z^n: P(3, 5, −7)');
  });

  it('gives a broken search its reason and no verdict', () => {
    const letter = endingLetter(
      { ...facts, ending: 'broken', verdict: 'open', ground: null, reason: 'the checker rejected the certificate' },
      place,
    );
    expect(letter.subject).toBe('Broken: P(3, 5, −7)');
    expect(letter.body).toContain('is broken: the checker rejected the certificate.');
    expect(letter.body).not.toMatch(/embeds in|excluded from/i);
  });
});

describe('a letter about two methods or a refusal', () => {
  const broken = { ...facts, ending: 'broken', verdict: 'open', ground: null } as const;
  it('names both results of a disagreement in the subject and the body', () => {
    const reason = 'two methods disagree at n = 9: rows list 3 orbits (set 0a), frames list 2 orbits (set 0b)';
    const letter = endingLetter({ ...broken, reason }, place);
    expect(letter.subject).toBe('Broken, two methods disagree: P(3, 5, −7)');
    expect(letter.body).toContain('at n = 9: rows list 3 orbits (set 0a), frames list 2 orbits (set 0b).');
    expect(letter.body).not.toMatch(/embeds in|excluded from/i);
  });

  it('says what to mend', () => {
    const letter = endingLetter(
      { ...broken, reason: 'refused: /method this method cannot answer. Ask again with this mended' },
      place,
    );
    expect(letter.subject).toBe('Refused: P(3, 5, −7)');
    expect(letter.body).toContain('cannot be answered as it was asked: this method cannot answer.');
  });
});

describe('times', () => {
  it('are written in the zone that is named', () => {
    expect(momentInWords('2026-12-31T23:30:00Z', 'Europe/Berlin')).toBe('on 1 January at 00:30 (Europe/Berlin)');
  });

  it.each([
    [0, 'Under a second'],
    [12_400, '12 s'],
    [250_000, '4 min 10 s'],
    [3_600_000, '1 h'],
  ])('%d ms is %s', (ms, words) => expect(cpuTimeInWords(ms)).toBe(words));
});
