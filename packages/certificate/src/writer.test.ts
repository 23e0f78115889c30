import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import {
  CertificateWriter,
  embeddingText,
  fileInteger,
  stringMatrix,
  type CertificateParts,
  type EmbeddingRecord,
  type WriterOptions,
} from './writer.ts';

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
const textOf = (bytes: Uint8Array) => new TextDecoder().decode(bytes);

/** Writes a list; answers the whole file and the chunks as they were handed over. */
function write(records: Iterable<EmbeddingRecord>, options: Partial<WriterOptions> = {}) {
  const chunks: Uint8Array[] = [];
  const writer = new CertificateWriter(sha256, { keep: (chunk) => chunks.push(chunk), ...options });
  for (const record of records) writer.add(record);
  const { head, last } = writer.finish(parts);
  return { file: [head, ...chunks, ...(last === null ? [] : [last])].map(textOf).join(''), chunks };
}

describe('CertificateWriter', () => {
  it('writes one object whose colophon hashes every byte before it', () => {
    const { file, chunks } = write([one]);
    expect(chunks).toEqual([]);
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
    const { file, chunks } = write(Array.from({ length: 10_001 }, () => one));
    const lines = file.trimEnd().split('\n');
    const head = JSON.parse(lines[0]!);
    expect(
      head.embeddings.chunks.map((c: { records: number }) => c.records).reduce((a: number, b: number) => a + b),
    ).toBe(10_001);
    expect(head.embeddings.chunks[0].sha256).toBe(sha256(chunks[0]!));
    expect(JSON.parse(lines.at(-1)!)).toEqual({ end: head.end });
    expect(lines.length).toBe(10_003);
  });

  it('hands chunks over while it writes, and says the same of the list as one object does', () => {
    const bounds = { oneObjectEmbeddings: 20, oneObjectBytes: 2_000, chunkBytes: 300 };
    for (let size = 0; size < 60; size += 1) {
      const list = Array.from({ length: size }, (_, i) => ({ ...one, rows: [[BigInt(i) ** 20n]] }));
      const expected = list.map(embeddingText);
      const inOne = write(list, { bounds, oneObject: true });
      expect(inOne.chunks).toEqual([]);
      expect(inOne.file).toContain(`"embeddings":[${expected.join(',')}],`);
      const { file, chunks } = write(list, { bounds });
      const large = size > 20 || expected.reduce((sum, line) => sum + line.length + 1, 0) > 2_000;
      expect({ size, chunks: chunks.length > 0 }).toEqual({ size, chunks: large });
      if (!large) expect(file).toBe(inOne.file);
      else {
        expect(chunks.map(textOf).join('')).toBe(expected.map((line) => `${line}\n`).join(''));
        // a chunk is closed only where the next line does not fit
        const lines = chunks.map((chunk) => textOf(chunk).split('\n'));
        chunks.forEach((chunk, i) => {
          if (lines[i]!.length > 2) expect(chunk.length).toBeLessThanOrEqual(300);
          const next = lines[i + 1]?.[0];
          if (next !== undefined) expect(chunk.length + next.length + 1).toBeGreaterThan(300);
        });
      }
    }
  });

  it('holds no more than the bound of one object and one chunk', () => {
    const bounds = { oneObjectEmbeddings: 20, oneObjectBytes: 2_000, chunkBytes: 300 };
    let given = 0;
    let added = 0;
    const writer = new CertificateWriter(sha256, { keep: (chunk) => (given += chunk.length), bounds });
    for (let i = 0; i < 500; i += 1) {
      writer.add(one);
      added += embeddingText(one).length + 1;
      expect(added - given).toBeLessThanOrEqual(2_000 + 300);
    }
    expect(given).toBeGreaterThan(added - 600);
  });

  it('leaves zero columns out and says how many where they would cost more than they tell', () => {
    const { file } = write([{ rows: [[1n]], zeros: 999_999, orbitSize: 2_000_000n, tests: {} }]);
    expect(JSON.parse(file).embeddings[0]).toEqual({
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
