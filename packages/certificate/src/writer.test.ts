import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { CertificateWriter, fileInteger, stringMatrix, type CertificateParts } from './writer.ts';

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');
const parts: CertificateParts = {
  question: { format: 'palmette.question/1' },
  lattice: { gram: [['1']], sign: 1, rank: 1, nullity: 0, determinant: '1', radical: [] },
  claim: {
    verdict: 'embeds',
    ground: 'exhaustion',
    target: { dimension: 2 },
    scope: 'all',
    dimension: 2,
    complete: true,
    orbits: '1',
    total: '4',
  },
  tests: {},
  evidence: { exclusions: [], list: null },
};
const one = { rows: [[1n]], zeros: 1, orbitSize: 4n, tests: {} };
const text = (chunks: Uint8Array[]) => chunks.map((c) => new TextDecoder().decode(c)).join('');

describe('CertificateWriter', () => {
  it('writes one object whose colophon hashes every byte before it', () => {
    const writer = new CertificateWriter(sha256);
    writer.add(one);
    const file = text(writer.finish(parts));
    const certificate = JSON.parse(file);
    expect(Object.keys(certificate)).toEqual([
      'format',
      'question',
      'lattice',
      'claim',
      'embeddings',
      'tests',
      'evidence',
      'end',
    ]);
    expect(certificate.embeddings).toEqual([{ matrix: [[1, 0]], orbitSize: '4', tests: {} }]);
    expect(certificate.end).toEqual({
      records: 1,
      sha256: sha256(new TextEncoder().encode(file.slice(0, file.lastIndexOf(',"end":')))),
    });
  });

  it('goes over to chunks above 10,000 embeddings, each chunk under its hash', () => {
    const writer = new CertificateWriter(sha256);
    for (let i = 0; i < 10_001; i += 1) writer.add(one);
    const files = writer.finish(parts);
    const lines = text(files).trimEnd().split('\n');
    const head = JSON.parse(lines[0]!);
    expect(
      head.embeddings.chunks.map((c: { records: number }) => c.records).reduce((a: number, b: number) => a + b),
    ).toBe(10_001);
    expect(head.embeddings.chunks[0].sha256).toBe(sha256(files[2]!));
    expect(JSON.parse(lines.at(-1)!)).toEqual({ end: head.end });
    expect(lines.length).toBe(10_003);
  });

  it('leaves zero columns out and says how many where they would cost more than they tell', () => {
    const writer = new CertificateWriter(sha256);
    writer.add({ rows: [[1n]], zeros: 999_999, orbitSize: 2_000_000n, tests: {} });
    expect(JSON.parse(text(writer.finish(parts))).embeddings[0]).toEqual({
      matrix: [[1]],
      zeroColumns: 999_999,
      orbitSize: '2000000',
      tests: {},
    });
  });

  it('writes sparse matrices above 200 basis vectors, big integers as strings', () => {
    expect(stringMatrix([[0n, 5n]], 201)).toEqual({ size: [1, 2], entries: [[0, 1, '5']] });
    expect(fileInteger(2n ** 60n)).toBe((2n ** 60n).toString());
    expect(fileInteger(-(2n ** 53n) + 1n)).toBe(-9007199254740991);
  });
});
