/** Arithmetic grounds on worked examples. */
import { describe, expect, it } from 'vitest';
import { arithmeticGround, buildLattice, readSourceText } from './index.ts';

describe('arithmetic grounds', () => {
  const lattice = (text: string) => buildLattice(readSourceText(text));
  it('17/5 fails in Z^3 by its determinant, in Z^4 at 2 and 17, not in Z^5', () => {
    expect(arithmeticGround(lattice('17/5'), 2)).toEqual({ ground: 'dimension' });
    expect(arithmeticGround(lattice('17/5'), 3)).toEqual({ ground: 'determinant' });
    expect(arithmeticGround(lattice('17/5'), 4)).toEqual({ ground: 'hilbert', primes: ['2', '17'] });
    expect(arithmeticGround(lattice('17/5'), 5)).toBeNull();
  });

  it('figure-eight: n = 2 by the determinant, n = 3 at 2 and 5', () => {
    const eight = buildLattice({
      kind: 'matrix',
      rows: [
        [2, -1],
        [-1, 3],
      ],
    });
    expect(arithmeticGround(eight, 2)).toEqual({ ground: 'determinant' });
    expect(arithmeticGround(eight, 3)).toEqual({ ground: 'hilbert', primes: ['2', '5'] });
    expect(arithmeticGround(eight, 4)).toBeNull();
  });

  // Legendre: 7 mod 8 is no sum of three squares; I_{r−1} ⊕ ⟨7⟩ needs r + 3 (Mordell 1930, Ko 1937)
  it('⟨7⟩ fails in Z^3, and I_2 ⊕ ⟨7⟩ in Z^5', () => {
    expect(arithmeticGround(buildLattice({ kind: 'matrix', rows: [[7]] }), 3)?.ground).toBe('hilbert');
    expect(
      arithmeticGround(
        buildLattice({
          kind: 'matrix',
          rows: [
            [1, 0, 0],
            [0, 1, 0],
            [0, 0, 7],
          ],
        }),
        5,
      )?.ground,
    ).toBe('hilbert');
    expect(
      arithmeticGround(
        buildLattice({
          kind: 'matrix',
          rows: [
            [1, 0, 0],
            [0, 1, 0],
            [0, 0, 7],
          ],
        }),
        6,
      ),
    ).toBeNull();
  });
});
