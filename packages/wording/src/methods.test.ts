import { METHOD_NAMES } from '@palmette/contracts';
import { describe, expect, it } from 'vitest';
import { agreementInWords, METHOD_WORDS, noSecondInWords, treeInWords } from './methods.ts';

describe('methods in words', () => {
  it('says what every method goes through', () => {
    expect(Object.keys(METHOD_WORDS)).toEqual([...METHOD_NAMES]);
    expect(METHOD_WORDS.frames.unless).toContain('from 0 to 2');
  });

  it('counts what a tree has', () => {
    expect(treeInWords({ method: 'rows', nodes: '1' })).toBe('rows, 1 node');
    expect(treeInWords({ method: 'frames', vectors: '12000' })).toBe(
      'frames, out of 12\u202f000 columns that could occur',
    );
    expect(treeInWords({ method: 'frames', glued: '3' })).toBe('frames by gluing, 3 unimodular lattices');
    expect(treeInWords({ method: 'later' })).toBe('later');
  });

  it('names two methods that agree in one order', () => {
    expect(agreementInWords(['frames', 'rows'])).toBe('two methods agree: rows, frames');
    expect(agreementInWords(['rows', 'frames'])).toBe('two methods agree: rows, frames');
  });

  it('says why there is no second opinion', () => {
    expect(noSecondInWords('hilbert')).toContain('arithmetic');
    expect(noSecondInWords('embedding')).toContain('the embedding');
    expect(noSecondInWords('exhaustion')).toContain('one opinion');
  });
});
