import { describe, expect, it } from 'vitest';
import { CertificateFile, denseRows, sizeOf, UnreadableCertificate } from './certificate-file.ts';

const head = {
  format: 'palmette.certificate/1',
  question: {},
  lattice: { gram: [['2']], sign: 1, rank: 1, nullity: 0, determinant: '2', radical: [] },
  claim: { verdict: 'embeds', ground: 'exhaustion', dimension: 2, complete: true, orbits: '1', total: '4' },
};
const embedding = (no: number) => ({ matrix: [[1, no]], orbitSize: '4', tests: {} });
const rest = { tests: {}, evidence: { exclusions: [], list: null } };
const bytes = (text: string) => new TextEncoder().encode(text);

const oneObject = bytes(
  JSON.stringify({ ...head, embeddings: [embedding(0), embedding(1)], ...rest, end: { records: 2, sha256: 'x' } }) +
    '\n',
);
const end = { records: 3, sha256: 'x' };
const lines = bytes(
  [
    JSON.stringify({
      ...head,
      embeddings: {
        chunks: [
          { sha256: 'a', records: 2, bytes: 1 },
          { sha256: 'b', records: 1, bytes: 1 },
        ],
      },
      ...rest,
      end,
    }),
    ...[0, 1, 2].map((no) => JSON.stringify(embedding(no))),
    JSON.stringify({ end }),
    '',
  ].join('\n'),
);

describe('a certificate on the screen', () => {
  it('is read as one object', async () => {
    const file = CertificateFile.read(oneObject);
    expect(file.count).toBe(2);
    expect(file.head.claim.total).toBe('4');
    expect(await file.page(1, 24)).toEqual([embedding(1)]);
  });

  it('is read as JSON lines, each embedding when it is looked at', async () => {
    const file = CertificateFile.read(lines);
    expect(file.count).toBe(3);
    expect(await file.page(0, 2)).toEqual([embedding(0), embedding(1)]);
    expect(await file.page(2, 26)).toEqual([embedding(2)]);
    expect(await file.page(24, 48)).toEqual([]);
  });

  it.each(['', '{', '{"format":"palmette.certificate/2"}', 'null'])('refuses %j', (text) => {
    expect(() => CertificateFile.read(bytes(text))).toThrow(UnreadableCertificate);
  });

  it('fills in the zeros of a sparse matrix', () => {
    const sparse = {
      size: [2, 3],
      entries: [
        [0, 1, -1],
        [1, 2, '5'],
      ],
    } as const;
    expect(sizeOf(sparse)).toEqual([2, 3]);
    expect(denseRows<number | string>(sparse, 0)).toEqual([
      [0, -1, 0],
      [0, 0, '5'],
    ]);
    expect(sizeOf([])).toEqual([0, 0]);
  });
});
