import { describe, expect, it } from 'vitest';
import { groupInWords, excludedOnTheWay, quickInWords, settledInWords } from './ground-words.ts';
import { onceKey } from './once-key.ts';
import { fillTarget, rankTarget, readTarget } from './target-draft.ts';
import type { SourceReading } from '../../workers/preview-messages.ts';

const reading = { rank: 3, determinant: '17' } as SourceReading;

describe('the target as typed', () => {
  it('becomes a target, and comes back', () => {
    for (const target of [
      { dimension: 8 },
      { excess: 2 },
      { least: {} },
      { least: { upTo: 20 } },
      { any: true },
    ] as const) {
      const draft = rankTarget();
      fillTarget(draft, target);
      expect(readTarget(draft)).toEqual({ target });
    }
    expect(readTarget(rankTarget())).toEqual({ target: { excess: 0 } });
  });

  it.each(['', '-1', '1.5', '1e3', '2000000', 'x'])('refuses %j with what was expected', (text) => {
    const read = readTarget({ ...rankTarget(), kind: 'dimension', dimension: text });
    expect('fault' in read && read.fault).toMatch(/^Refused: expected n as a whole number from 0 to 1 000 000, found/);
  });
});

describe('words', () => {
  it('of an arithmetic verdict name target and reason', () => {
    const said = settledInWords(
      { excluded: [{ dimension: 3, ground: { ground: 'determinant' } }], nowhere: null, settled: true, next: null },
      reading,
    );
    expect(said.heading).toBe('Excluded: it does not embed in Z^3.');
    expect(said.lead).toContain('17 is not one');
  });

  it('of columns that do not span exclude every Z^n, whatever was asked', () => {
    const nowhere = { ground: 'column', vectors: '0', spanned: 0 } as const;
    const at = settledInWords(
      { excluded: [{ dimension: 6, ground: { ground: 'determinant' } }], nowhere, settled: true, next: null },
      { rank: 6, determinant: '3' } as SourceReading,
    );
    expect(at.heading).toBe('Excluded: it embeds in no Z^n, Z^6 included.');
    expect(at.lead).toMatch(/c\^TQ\^\{−1\}c ≤ 1, and no integer column does\. .*3 is not one/);
    const any = settledInWords(
      { excluded: [{ dimension: null, ground: nowhere }], nowhere, settled: true, next: null },
      reading,
    );
    expect(any.heading).toBe('Excluded: it embeds in no Z^n.');
  });

  it('of what is excluded on the way to the least name the primes', () => {
    const words = excludedOnTheWay(
      {
        excluded: [
          { dimension: 3, ground: { ground: 'determinant' } },
          { dimension: 4, ground: { ground: 'hilbert', primes: ['2', '17'] } },
        ],
        nowhere: null,
        settled: false,
        next: 5,
      },
      reading,
    );
    expect(words).toBe(
      '17 is not a square, so Z^3 is excluded. Z^4 is excluded by Hilbert symbols at the primes 2 and 17.',
    );
  });

  it('of a quick look never claim a verdict', () => {
    const done = { kind: 'done', dimension: 5, complete: true, orbits: '1', nodes: '4', ms: 2, first: null } as const;
    const embeds = quickInWords({ ...done, verdict: 'embeds' });
    expect(embeds.heading).toBe('It seems to embed in Z^5, in exactly one way up to symmetry.');
    expect(embeds.lead).toContain('not certified');
    expect(quickInWords({ ...done, verdict: 'excluded', orbits: '0', dimension: null }).heading).toBe(
      'It seems to embed in no Z^n.',
    );
    const open = quickInWords({
      kind: 'unfinished',
      dimension: 9,
      orbits: '0',
      nodes: '100000',
      ms: 180,
      seconds: { low: 40, likely: 130, high: 300 },
      tried: ['rows'],
      first: null,
    });
    expect(open.lead).toContain('says nothing about the answer');
    expect(open.lead).toMatch(/8 times in 10.*That is by rows alone; the search compares its methods/);
    const far = quickInWords({
      kind: 'unfinished',
      dimension: null,
      orbits: '0',
      nodes: '1284',
      ms: 200,
      seconds: { low: 0.4, likely: 1e22, high: 1e26 },
      tried: ['rows', 'frames'],
      first: null,
    });
    expect(far.heading).toBe('It needs a search.');
    expect(far.lead).not.toContain('alone');
    expect(far.lead).toMatch(/from under 1 s to more than 100 years/);
  });

  it('of a group join equal summands', () => {
    expect(groupInWords([])).toBe('trivial');
    expect(groupInWords(['41'])).toBe('Z/41');
    expect(groupInWords(['3', '9', '9'])).toBe('Z/3 + (Z/9)^{2}');
  });
});

describe('the key of a sending', () => {
  it('stays for the same document and changes with it', () => {
    const key = onceKey();
    const first = key('a');
    expect(first).toMatch(/^[0-9a-f]{32}$/);
    expect(key('a')).toBe(first);
    expect(key('b')).not.toBe(first);
  });
});
