/** Dense matrices of exact integers: rows of bigint. */

export type BigMatrix = bigint[][];
export type ReadonlyBigMatrix = readonly (readonly bigint[])[];

export function bigMatrix(rows: readonly (readonly (bigint | number | string)[])[]): BigMatrix {
  return rows.map((row) => row.map(BigInt));
}

export function identityMatrix(n: number): BigMatrix {
  return Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, j) => (i === j ? 1n : 0n)));
}

export function zeroMatrix(rows: number, columns: number): BigMatrix {
  return Array.from({ length: rows }, () => new Array<bigint>(columns).fill(0n));
}

export function transpose(m: ReadonlyBigMatrix): BigMatrix {
  const columns = m[0]?.length ?? 0;
  return Array.from({ length: columns }, (_, j) => m.map((row) => row[j]!));
}

/** Product of an a × b and a b × c matrix; zeros of the left factor cost nothing. */
export function multiply(a: ReadonlyBigMatrix, b: ReadonlyBigMatrix): BigMatrix {
  const columns = b[0]?.length ?? 0;
  return a.map((row) => {
    const out = new Array<bigint>(columns).fill(0n);
    row.forEach((x, k) => {
      if (x === 0n) return;
      const other = b[k]!;
      for (let j = 0; j < columns; j += 1) {
        const y = other[j]!;
        if (y !== 0n) out[j]! += x * y;
      }
    });
    return out;
  });
}

export function dot(a: readonly bigint[], b: readonly bigint[]): bigint {
  let sum = 0n;
  for (let i = 0; i < a.length; i += 1) {
    const x = a[i]!;
    if (x !== 0n) sum += x * b[i]!;
  }
  return sum;
}

export function isIdentity(m: ReadonlyBigMatrix): boolean {
  return m.every((row, i) => row.length === m.length && row.every((x, j) => x === (i === j ? 1n : 0n)));
}
