import { describe, expect, it } from 'vitest';
import {
  agoInWords,
  estimateSentence,
  momentOnScreen,
  readSpan,
  roughSpanInWords,
  spanInWords,
  spreadInWords,
} from './durations.ts';

describe('spans', () => {
  it.each([
    [0, '0 s'],
    [0.0004, 'under 1 ms'],
    [0.004, '4 ms'],
    [0.9999, '1.0 s'],
    [4.24, '4.2 s'],
    [59.9, '1 min'],
    [250, '4 min 10 s'],
    [3_600, '1 h'],
    [48_660, '13 h 31 min'],
    [3_599.6, '1 h'],
    [360_000, '4 d 4 h'],
  ])('%d s is “%s”', (seconds, words) => expect(spanInWords(seconds)).toBe(words));

  it('rounds an estimate as it deserves', () => {
    expect(roughSpanInWords(7_832)).toBe('2 h 10 min');
    expect(roughSpanInWords(0.2)).toBe('under 1 s');
    expect(roughSpanInWords(1_700)).toBe('30 min');
  });

  it('never gives an estimate without its spread (LOOK-DETAIL.md 6, number 11)', () => {
    const spread = { low: 4_800, likely: 7_832, high: 14_400 };
    expect(estimateSentence(spread)).toBe(
      'Between 1 h 20 min and 4 h to go (8 times in 10), most likely about 2 h 10 min.',
    );
    expect(spreadInWords(spread)).toBe('1 h 20 min to 4 h, 8 times in 10');
  });

  it('says how long ago something was', () => {
    expect([0, 3.7, 125, 7_300, 400_000].map(agoInWords)).toEqual([
      'just now',
      '3 s ago',
      '2 min ago',
      '2 h ago',
      '4 d ago',
    ]);
  });

  it('writes a moment with no more of a date than is needed', () => {
    const now = Date.parse('2026-03-04T12:00:00Z');
    expect(momentOnScreen('2026-03-04T14:02:00Z', now, 'UTC')).toBe('14:02');
    expect(momentOnScreen('2026-03-03T22:10:00Z', now, 'UTC')).toBe('3 March, 22:10');
    expect(momentOnScreen('2025-12-31T23:30:00Z', now, 'UTC')).toBe('31 December 2025, 23:30');
    expect(momentOnScreen('2026-03-03T23:30:00Z', now, 'Europe/Berlin')).toBe('00:30');
  });

  it.each([
    ['8 h', 28_800],
    ['8', 28_800],
    ['90 min', 5_400],
    ['1 h 30 min', 5_400],
    ['1.5h', 5_400],
    ['45 s', 45],
    ['2d', 172_800],
    ['0', null],
    ['soon', null],
    ['', null],
    ['-3 h', null],
  ])('reads “%s” as %s s', (text, seconds) => expect(readSpan(text)).toBe(seconds));
});
