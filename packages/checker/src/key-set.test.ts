import { describe, expect, it } from 'vitest';
import { KeySet } from './key-set.ts';
import { PieceReader } from './piece-reader.ts';
import { sha256Hex } from './sha256.ts';

const hash = (i: number) => sha256Hex(new TextEncoder().encode(String(i)));

describe('KeySet', () => {
  it('knows what was added, and nothing else, while it grows', () => {
    const set = new KeySet();
    for (let i = 0; i < 5_000; i += 1) {
      expect({ i, fresh: set.add(hash(i)) }).toEqual({ i, fresh: true });
      expect(set.add(hash(i >> 1))).toBe(false);
    }
    expect(set.size).toBe(5_000);
  });

  it('tells keys apart that differ in one word only', () => {
    const keys = ['00000000', '00000002'].flatMap((a) => ['0', '1', '2'].map((b) => `${a}00000007${b.repeat(16)}`));
    const set = new KeySet();
    expect(keys.map((key) => set.add(key))).toEqual(keys.map(() => true));
    expect(keys.map((key) => set.add(key))).toEqual(keys.map(() => false));
  });
});

describe('PieceReader', () => {
  it('gives the same lines and bytes however the pieces are cut', () => {
    const bytes = new TextEncoder().encode('head\n12345678\nlast');
    const read = (pieces: Uint8Array | Iterable<Uint8Array>) => {
      const reader = new PieceReader(pieces);
      return [reader.line(), reader.take(3), reader.take(6), reader.line(), reader.take(1), reader.line()].map((b) =>
        new TextDecoder().decode(b),
      );
    };
    const expected = ['head', '123', '45678\n', 'last', '', ''];
    expect(read(bytes)).toEqual(expected);
    for (let size = 1; size <= bytes.length; size += 1) {
      const pieces = Array.from({ length: Math.ceil(bytes.length / size) + 1 }, (_, i) =>
        bytes.subarray(i * size, (i + 1) * size),
      );
      expect({ size, read: read(pieces) }).toEqual({ size, read: expected });
    }
  });
});
