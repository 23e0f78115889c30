import type { QuestionView } from '@palmette/contracts';
import { describe, expect, it } from 'vitest';
import type { FileHead, FileTree } from '../../api/certificate-file.ts';
import { evidenceFacts, groundSentence } from './ground-sentence.ts';

const question = { verdict: 'embeds', ground: 'exhaustion', rank: 3, dimension: 3 } as QuestionView;
const head = (evidence: FileHead['evidence']) => ({ lattice: { determinant: '4' }, evidence }) as FileHead;
const rows: FileTree = { method: 'rows', dimension: 3, nodes: '7', orbits: '2' };
const frames: FileTree = { method: 'frames', dimension: 3, vectors: '9', orbits: '2' };

describe('why a verdict holds', () => {
  it('fits every method', () => {
    for (const list of [rows, frames])
      expect(groundSentence(question, head({ exclusions: [], list }))).toBe(
        'Every case was gone through, and the list holds each orbit once.',
      );
  });

  it('gives the columns that do not span', () => {
    const excluded = { ...question, verdict: 'excluded', ground: 'column', dimension: null } as QuestionView;
    const exclusions = [{ dimension: null, ground: 'column' as const, vectors: '4', spanned: 2 }];
    expect(groundSentence(excluded, head({ exclusions, list: null }))).toBe(
      'Up to sign only 4 integer columns could occur in an embedding (c^TQ^{−1}c ≤ 1), and the dimension of their span is 2, where 3 is needed.',
    );
    expect(evidenceFacts(excluded, head({ exclusions, list: null }))).toEqual([]);
  });
});

describe('facts of the evidence', () => {
  it('name the tree', () => {
    expect(evidenceFacts(question, head({ exclusions: [], list: frames }))).toEqual([
      { name: 'listed by', value: 'frames, out of 9 columns that could occur' },
    ]);
    expect(evidenceFacts(question, null)).toEqual([]);
  });

  it('say that two methods agree, of a list and of an exclusion', () => {
    expect(evidenceFacts(question, head({ exclusions: [], list: frames, second: rows }))).toEqual([
      { name: 'second opinion', value: 'two methods agree: rows, frames' },
      { name: 'listed by', value: 'frames, out of 9 columns that could occur; and by rows, 7 nodes' },
    ]);
    const exclusions = [{ dimension: 3, ground: 'exhaustion' as const, tree: rows }];
    const excluded = { ...question, verdict: 'excluded' } as QuestionView;
    expect(evidenceFacts(excluded, head({ exclusions, list: null, second: frames }))[0]?.value).toBe(
      'two methods agree: rows, frames',
    );
  });

  it('say why a second opinion is not there', () => {
    const excluded = { ...question, verdict: 'excluded', ground: 'determinant' } as QuestionView;
    const exclusions = [{ dimension: 3, ground: 'determinant' as const }];
    expect(evidenceFacts(excluded, head({ exclusions, list: null, second: null }))).toEqual([
      { name: 'second opinion', value: 'not needed: arithmetic settles it without a search' },
    ]);
  });
});
